import type { Database, Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { DeskRequest } from '#shared/schemas/desk'
import type { AnswerLetter } from '#shared/schemas/letter'
import type { UploadView } from '#shared/schemas/referral'
import { formOf, takeAnswer } from './answer-letter'
import type { ServiceContext } from './context'
import { openRequest } from './letters'
import { recordView } from './record-view'
import { storeUpload } from './store-upload'
import { ownEntries } from './view-desk'

/**
 * The open request about an own referral. Who gets a copy only is not asked.
 * @throws DomainError 'not-found' for every other referral · 'wrong-state' when nothing is asked any more
 */
async function ownRequest(context: ServiceContext, db: Database | Trx, referralId: string) {
  const entries = await ownEntries(context)
  const referral = await db.selectFrom('referral').selectAll().where('id', '=', referralId).where('physicianId', 'in', entries.map(entry => entry.id)).where('state', 'not in', ['draft', 'entered-in-error']).executeTakeFirst()
  if (!referral) throw new DomainError('not-found')
  const letter = referral.state === 'returned' ? await openRequest(db, referralId) : undefined
  if (!letter) throw new DomainError('wrong-state', { message: 'Nothing is asked about this referral any more.' })
  return { referral, letter }
}

/** What the laboratory asks about an own referral, with what stands. The look is recorded. @throws DomainError as `ownRequest` */
export async function viewRequest(context: ServiceContext, referralId: string): Promise<DeskRequest> {
  const found = await ownRequest(context, context.db, referralId)
  const { number, siteId, patientId } = found.referral
  const patient = await context.db.selectFrom('patient').select(['familyName', 'givenName', 'birthDate']).where('id', '=', patientId).executeTakeFirstOrThrow()
  const site = await context.db.selectFrom('site').select(['name as siteName', 'phone as sitePhone']).where('id', '=', siteId).executeTakeFirstOrThrow()
  recordView(context, { subject: 'referral', subjectId: referralId, siteId, patientId })
  return { number, ...patient, ...site, note: found.letter.note, ...await formOf(context, found) }
}

/**
 * Completes what was asked, as through the link of the mail: only those fields change, and the referral is received again.
 * @throws DomainError as `ownRequest` and `takeAnswer`
 */
export async function answerRequest(context: ServiceContext, { id, values, words }: { id: string } & Pick<AnswerLetter, 'values' | 'words'>): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const { letter } = await ownRequest({ ...context, db: trx }, trx, id)
    await takeAnswer(context, trx, letter.id, values, words)
  })
}

/** A letter or result with the answer. @throws DomainError as `ownRequest` and `storeUpload` */
export async function addRequestFile(context: ServiceContext, { id, name, bytes }: { id: string, name: string, bytes: Uint8Array }): Promise<Pick<UploadView, 'id' | 'originalName' | 'byteCount'>> {
  const { letter } = await ownRequest(context, context.db, id)
  const { id: uploadId, originalName, byteCount } = await storeUpload(context, { referralId: id, name, bytes, letterId: letter.id })
  return { id: uploadId, originalName, byteCount }
}
