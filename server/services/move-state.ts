import { sql } from 'kysely'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { deliveryMoves, referralMoves, studyMoves, type DeliveryState, type ReferralState, type StudyState } from '#shared/states'
import { now, type ServiceContext } from './context'

interface StateOf { referral: ReferralState, study: StudyState, delivery: DeliveryState }
export type StatefulSubject = keyof StateOf

const moves = { referral: referralMoves, study: studyMoves, delivery: deliveryMoves } satisfies { [S in StatefulSubject]: Record<StateOf[S], readonly StateOf[S][]> }

export interface Move<S extends StatefulSubject> { subject: S, id: string, from: StateOf[S] | readonly StateOf[S][], to: StateOf[S], reason?: string }

/**
 * Moves one thing to its next state and writes the change. The update names the state it expects, so that of two
 * people who act at once one wins and the other is told.
 * @returns the state it came from
 * @throws DomainError 'not-found', or 'wrong-state' when the thing is no longer in an expected state
 * @throws Error when shared/states.ts has no such move: a fault of the program
 */
export async function moveState<S extends StatefulSubject>(context: ServiceContext, trx: Trx, move: Move<S>): Promise<StateOf[S]> {
  const expected = (Array.isArray(move.from) ? move.from : [move.from]) as readonly StateOf[S][]
  const possible = moves[move.subject] as Record<string, readonly string[]>
  for (const from of expected) {
    if (!possible[from]!.includes(move.to)) throw new Error(`No ${move.subject} goes from ${from} to ${move.to}.`)
  }
  const table = sql.table(move.subject)
  const { rows: [current] } = await sql<{ state: StateOf[S] }>`select state from ${table} where id = ${move.id}`.execute(trx)
  if (!current) throw new DomainError('not-found')
  if (!expected.includes(current.state)) throw new DomainError('wrong-state', { details: { state: current.state } })
  const at = now(context)
  const reason = move.reason ?? ''
  const result = await sql`update ${table} set state = ${move.to}, state_since = ${at}, state_reason = ${reason} where id = ${move.id} and state = ${current.state}`.execute(trx)
  if (result.numAffectedRows !== 1n) throw new DomainError('wrong-state', { details: { state: current.state } })
  await writeStateChange(context, trx, { subject: move.subject, id: move.id, from: current.state, to: move.to, reason })
  return current.state
}

/** The first state of a new thing, or a change that the caller made itself (a report version). */
export async function writeStateChange(context: ServiceContext, trx: Trx, change: { subject: StatefulSubject | 'report-version', id: string, from: string | null, to: string, reason?: string }): Promise<void> {
  await trx.insertInto('stateChange').values({
    subject: change.subject, subjectId: change.id, fromState: change.from, toState: change.to,
    at: now(context), byUserId: context.actor.userId, reason: change.reason ?? '',
  }).execute()
}
