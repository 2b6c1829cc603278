import type { Trx } from '#server/database/connection'
import type { Study } from '#server/database/tables/study'
import type { Policy } from '#shared/calculations/types'
import { DomainError } from '#shared/errors'
import { meanings, type SignInput } from '#shared/schemas/report'
import { buildSnapshot, signatureOf } from './build-snapshot'
import { canonicalJson } from './canonical-json'
import { now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { moveState } from './move-state'
import { queueDeliveries } from './queue-deliveries'
import { readingFacts } from './reading-facts'
import { recordAuditEvent } from './record-audit-event'
import { ensureReport, refuseOpenChecks } from './save-draft'
import { storeVersion } from './store-version'
import { studyToRead } from './take-study'
import { verifyOwnPassword } from './verify-own-password'

/**
 * Asks the signer for the password again (21 CFR 11.200(a)(1): at least one component at each signing within a session).
 * A wrong one is kept in the trail. Slow; before the transaction, never inside.
 * @throws DomainError 'not-allowed' in training, 'wrong-password', 'too-many-requests'
 */
export async function proveSigner(context: ServiceContext, password: string, about: { subject: string, subjectId: string, siteId: string, patientId: string }): Promise<void> {
  if (context.actor.inTraining) throw new DomainError('not-allowed', { message: 'Whoever is in training writes the report; a supervisor signs it. Mark it ready to sign.' })
  const right = context.actor.userId !== null && await verifyOwnPassword(context, context.actor.userId, password)
  if (right) return
  await context.db.transaction().execute(trx => recordAuditEvent(context, trx, { name: 'report.not-signed', ...about, data: { because: 'wrong password' } }))
  throw new DomainError('wrong-password', { fields: [{ path: 'password', message: 'The password is not right. Nothing was signed.' }] })
}

/** A technical report is signed as such, and only a technical one. */
export function checkMeaning(meaning: SignInput['meaning'], technicalOnly: boolean): void {
  const wanted = technicalOnly ? meanings[1] : meanings[0]
  if (meaning !== wanted) throw new DomainError('not-valid', { fields: [{ path: 'meaning', message: technicalOnly ? 'A technical report is signed as holding no clinical interpretation.' : 'This report holds an interpretation; sign it as such, or mark it as technical.' }] })
}

export interface SignedReport { reportId: string, version: number }

/**
 * Signs the first version. One transaction holds the frozen version, the study's and the referral's state, the audit
 * event and the deliveries with their mails: all of it or nothing. The PDF is made afterwards from the frozen copy.
 *
 * Of two who sign at once one wins and the other is told; a row or a draft that changed since the check refuses.
 * @throws DomainError 'wrong-password', 'already-signed', 'wrong-state', 'changed-meanwhile', 'not-ready', 'not-valid'
 */
export async function signReport(context: ServiceContext, { studyId, ...input }: { studyId: string } & SignInput): Promise<SignedReport> {
  const study = await context.db.selectFrom('study').select(['id', 'siteId', 'patientId']).where('id', '=', studyId).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  await proveSigner(context, input.password, aboutStudy(study))
  return await signProven(context, { studyId, ...input })
}

/** What `signReport` does once the password was proven; the generator of the demonstration begins here. */
export async function signProven(context: ServiceContext, { studyId, ...input }: { studyId: string } & Omit<SignInput, 'password'>): Promise<SignedReport> {
  return await context.db.transaction().execute(trx => signInside(context, trx, studyId, input))
}

async function signInside(context: ServiceContext, trx: Trx, studyId: string, input: Omit<SignInput, 'password'>): Promise<SignedReport> {
  const study = await studyToRead(trx, studyId)
  if (study.state !== 'handed-over') throw new DomainError('wrong-state', { message: 'The study is with the bench. It can be signed when it was handed over again.', details: { state: study.state } })
  const facts = await readingFacts(context, trx, studyId)
  if (facts.assessed.fingerprint !== input.fingerprint || (facts.report?.draftRevision ?? 0) !== input.draftRevision) {
    throw new DomainError('changed-meanwhile', { message: 'A value or the draft changed after you looked. Nothing was signed; look at the page again.', details: { fingerprint: facts.assessed.fingerprint, draftRevision: facts.report?.draftRevision ?? 0 } })
  }
  refuseOpenChecks(facts.checks)
  checkMeaning(input.meaning, facts.draft.technicalOnly)
  const report = await ensureReport(context, trx, study)
  const signature = await signatureOf(context, trx, input.meaning, now(context), facts.site.timeZone)
  const snapshot = await buildSnapshot(context, trx, facts, { number: report.number, signature })
  const version = await storeVersion(context, trx, report, snapshot, study, 'preliminary')
  await moveOn(context, trx, study, facts.assessed.policy)
  await queueDeliveries(context, trx, { version, snapshot, siteId: study.siteId, patientId: study.patientId }, facts.recipients)
  return { reportId: report.id, version: version.version }
}

/** The study is read and stays judged by what it was signed with; its referral is answered with the first final report. */
async function moveOn(context: ServiceContext, trx: Trx, study: Study, policy: Policy): Promise<void> {
  await moveState(context, trx, { subject: 'study', id: study.id, from: 'handed-over', to: 'read' })
  await trx.updateTable('study').set({ readerId: study.readerId ?? context.actor.userId, returnQuestion: '', returnRunId: null, policyJson: canonicalJson(policy) }).where('id', '=', study.id).execute()
  await moveState(context, trx, { subject: 'referral', id: study.referralId, from: 'attended', to: 'answered' })
}
