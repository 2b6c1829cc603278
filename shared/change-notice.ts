import type { Action } from './permissions'

/**
 * "Something changed": what the event stream carries. Ids and kinds only; a page that shows the thing fetches it again,
 * and is asked for its permission then as always.
 */
export interface ChangeNotice {
  /** The kind of thing, as the audit trail names it: 'study', 'referral', 'task' … */
  kind: ChangeKind
  id: string
  /** The audit event, for example 'study.cells-saved'; 'presence' for comings and goings, which no trail keeps. */
  what: string
  siteId: string | null
  /** Who did it (an id), so that a page can leave out what it did itself. */
  by: string | null
}

/** Which action one needs at the site of a thing to hear that it changed. What stands in no line is heard by nobody. */
export const heardWith = {
  study: 'study.read',
  referral: 'referral.read',
  report: 'report.read',
  delivery: 'delivery.read',
  task: 'task.read',
  patient: 'patient.read',
  upload: 'upload.read',
  adoption: 'shelf.read',
} as const satisfies Record<string, Action>
export type ChangeKind = keyof typeof heardWith

/** What a poll answers, and what the stream's first message says: `again` when too much was missed to tell it one by one. */
export interface ChangeNews { seq: number, again: boolean, changes: ChangeNotice[] }
