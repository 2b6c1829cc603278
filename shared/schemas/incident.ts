import * as z from 'zod'
import type { DeliveryState } from '../states'

/**
 * The incident record of a report that reached somebody it was not meant for.
 *
 * The four factors are those of 45 CFR 164.402, definition of "breach", (2)(i) to (iv): nature of the data, the person who
 * got it, whether it was acquired or viewed, and how far the risk was mitigated. The clocks: 72 hours to the authority
 * after becoming aware (Regulation (EU) 2016/679, Article 33(1)), 60 calendar days to the individuals after discovery
 * (45 CFR 164.404(b)). All from memory; which of them bind is a question of local law.
 */
export const authorityHours = 72
export const individualsDays = 60

export const viewedAnswers = ['no', 'yes', 'unknown'] as const
export const viewedWords: Record<(typeof viewedAnswers)[number], string> = { no: 'no, as far as is known', yes: 'yes', unknown: 'not known' }
export const contactMeans = ['telephone', 'letter', 'in-person', 'e-mail'] as const
export const contactWords: Record<(typeof contactMeans)[number], string> = { 'telephone': 'by telephone', 'letter': 'by letter', 'in-person': 'in person', 'e-mail': 'by e-mail' }
export const incidentDecisions = ['nobody', 'authority', 'individuals', 'both'] as const
export const decisionWords: Record<(typeof incidentDecisions)[number], string> = {
  nobody: 'nobody has to be told', authority: 'the authority is told', individuals: 'the patient is told', both: 'the authority and the patient are told',
}

const words = z.string().trim().max(2000).default('')
const moment = z.iso.datetime({ offset: true, message: 'Enter date and time.' })

/** What people enter; anything may still be missing until the record is closed. */
export const incidentSchema = z.object({
  awareAt: moment,
  dataNature: words,
  whoGotIt: words,
  viewed: z.enum(viewedAnswers),
  viewedWords: words,
  mitigation: words,
  contactName: z.string().trim().max(200).default(''),
  contactAt: moment.nullable().default(null),
  contactMeans: z.enum(contactMeans).nullable().default(null),
  contactWords: words,
  deletionConfirmed: z.boolean().default(false),
  decision: z.enum(incidentDecisions).nullable().default(null),
  decisionReason: words,
  toldAt: moment.nullable().default(null),
})
export type IncidentInput = z.output<typeof incidentSchema>
export const changeIncidentSchema = incidentSchema.extend({ revision: z.number().int().min(1) })

/** What is still missing before it can be closed, in words for people, by field. */
export function missingForClosing(incident: IncidentInput): { path: keyof IncidentInput, message: string }[] {
  const told = incident.decision !== null && incident.decision !== 'nobody'
  const wanted: [keyof IncidentInput, boolean, string][] = [
    ['dataNature', incident.dataNature === '', 'Say what the report held.'],
    ['whoGotIt', incident.whoGotIt === '', 'Say who got it.'],
    ['viewedWords', incident.viewedWords === '', 'Say how you know whether it was opened.'],
    ['mitigation', incident.mitigation === '', 'Say what was done to limit the harm.'],
    ['contactName', incident.contactName === '', 'Say who was spoken to, or why nobody could be.'],
    ['contactAt', incident.contactAt === null, 'Enter when they were contacted.'],
    ['contactMeans', incident.contactMeans === null, 'Choose how they were contacted.'],
    ['decision', incident.decision === null, 'Decide who has to be told.'],
    ['decisionReason', incident.decisionReason === '', 'Give the reasons of the decision.'],
    ['toldAt', told && incident.toldAt === null, 'Enter when they were told.'],
  ]
  return wanted.flatMap(([path, missing, message]) => missing ? [{ path, message }] : [])
}

/** @example clocksOf('2026-12-02T09:00:00.000Z').authorityDueAt // => '2026-12-05T09:00:00.000Z' */
export function clocksOf(awareAt: string): { authorityDueAt: string, individualsDueAt: string } {
  const after = (hours: number) => new Date(Date.parse(awareAt) + hours * 3_600_000).toISOString()
  return { authorityDueAt: after(authorityHours), individualsDueAt: after(individualsDays * 24) }
}

export interface IncidentRow {
  id: string
  reportId: string
  reportNumber: string
  version: number
  siteName: string
  recipient: string
  practiceName: string
  town: string
  reason: string
  awareAt: string
  authorityDueAt: string
  individualsDueAt: string
  decision: IncidentInput['decision']
  closedAt: string | null
  closedBy: string | null
}

/** Another delivery that went to the same address or the same practice. */
export interface OtherDelivery { id: string, reportId: string, reportNumber: string, version: number, patientName: string, recordNumber: string, state: DeliveryState, sentAt: string | null }
/** One line of what the trail knows about the delivery. */
export interface IncidentLogLine { at: string, sentence: string }

export interface IncidentView extends IncidentRow, IncidentInput {
  deliveryId: string
  physicianId: string
  address: string
  openedBy: string
  revision: number
  log: IncidentLogLine[]
  others: OtherDelivery[]
  /** How many more there are at sites that the reader has no role at. */
  othersElsewhere: number
  /** A later delivery of the same report to somebody else than the unintended one. */
  sentInstead: { recipient: string, practiceName: string, town: string }[]
}
