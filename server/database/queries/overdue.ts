import { sql } from 'kysely'
import type { Role } from '#shared/permissions'
import type { Urgency } from '#shared/schemas/referral'
import type { Clocks } from '#shared/policies/clocks'
import type { Database } from '../connection'

/** Something that waits, since when, and by which clock. */
export interface WaitingItem { kind: OverdueKind, subject: 'study' | 'referral', subjectId: string, number: string, siteId: string, urgency: Urgency, since: string, ownerId: string | null }
export type OverdueKind = 'study-unsigned' | 'referral-unanswered' | 'referral-unbooked'

/** The clock of each kind, the role that answers for it, and what to do. */
export const overdueKinds: Record<OverdueKind, { clock: keyof Clocks, role: Role, sentence: (number: string) => string }> = {
  'study-unsigned': { clock: 'sign', role: 'neurologist', sentence: number => `${number} waits for its reading longer than the clock allows. Read and sign it, or hand it to a colleague.` },
  'referral-unanswered': { clock: 'answerReferral', role: 'administrator', sentence: number => `${number} was received and not answered in time. Accept it, return it or decline it.` },
  'referral-unbooked': { clock: 'offerAppointment', role: 'administrator', sentence: number => `${number} was accepted and has no appointment in time. Book it.` },
}

/** Everything with a clock that is still waiting. */
export async function waitingItems(db: Database): Promise<WaitingItem[]> {
  const { rows } = await sql<WaitingItem>`
    select 'study-unsigned' as kind, 'study' as subject, s.id as subject_id, s.number, s.site_id, r.urgency, s.handed_over_at as since, s.reader_id as owner_id
      from study s join referral r on r.id = s.referral_id where s.state = 'handed-over' and s.handed_over_at is not null
    union all
    select case r.state when 'received' then 'referral-unanswered' else 'referral-unbooked' end, 'referral', r.id, r.number, r.site_id, r.urgency,
      case r.state when 'received' then r.state_since else r.received_at end, null
      from referral r where r.state in ('received', 'accepted') and r.received_at is not null`.execute(db)
  return rows
}

/** Open tasks about overdue things. */
export async function openOverdueTasks(db: Database): Promise<{ id: string, kind: OverdueKind, subjectId: string, siteId: string | null, dueAt: string | null, sentence: string }[]> {
  const rows = await db.selectFrom('task').select(['id', 'kind', 'subjectId', 'siteId', 'dueAt', 'sentence']).where('doneAt', 'is', null).where('kind', 'in', Object.keys(overdueKinds)).execute()
  return rows.map(({ kind, ...row }) => ({ ...row, kind: kind as OverdueKind }))
}

/** Who holds a role at a site and could be asked, with how much already waits for each; the least burdened first. */
export async function holdersByBurden(db: Database, siteId: string, role: Role, day: string): Promise<{ id: string, email: string }[]> {
  return await db.selectFrom('roleHolding').innerJoin('user', 'user.id', 'roleHolding.userId').select(['user.id', 'user.email'])
    .where('roleHolding.siteId', '=', siteId).where('roleHolding.role', '=', role).where('user.deactivatedAt', 'is', null)
    .where('roleHolding.startsOn', '<=', day).where(eb => eb.or([eb('roleHolding.endsOn', 'is', null), eb('roleHolding.endsOn', '>=', day)]))
    .orderBy(eb => eb.selectFrom('task').select(eb.fn.countAll().as('n')).whereRef('task.ownerId', '=', 'user.id').where('task.doneAt', 'is', null)).orderBy('user.name').execute()
}
