import { randomBytes, randomUUID } from 'node:crypto'
import { mkdir, open, readFile, rename, rm } from 'node:fs/promises'
import { join } from 'node:path'
import type { Database, Trx } from '#server/database/connection'
import type { Upload } from '#server/database/tables/upload'
import { DomainError } from '#shared/errors'
import type { UploadView } from '#shared/schemas/referral'
import { sha256Hex } from './canonical-json'
import { checkUpload } from './check-upload'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { recordView } from './record-view'

const MOST_FILES = 20

/** A sender may name a file at any length; what comes before its last 300 characters is not looked at. */
const LONGEST_NAME = 300

/**
 * A name that is safe in a header, a list and a download folder: no path, no control characters, and the ending of what
 * the file really is.
 * @example safeName('..\\..\\scan.pdf.exe', 'pdf') // => 'scan.pdf.pdf'
 */
export function safeName(sent: string, extension: string): string {
  const base = (sent.slice(-LONGEST_NAME).split(/[/\\]/).at(-1) ?? '').replace(/[\p{C}"<>:|?*;%]/gu, '').replace(/\.[^.]{1,8}$/, '').replace(/^[.\s]+|[.\s]+$/g, '').slice(0, 100)
  return `${base || 'letter'}.${extension}`
}

const folderOf = (context: ServiceContext) => join(context.settings.dataDir, 'uploads')

/** Sealed bytes under a random name; on the disk before the row that names them is. */
async function writeSealed(context: ServiceContext, storedName: string, bytes: Uint8Array): Promise<void> {
  await mkdir(folderOf(context), { recursive: true, mode: 0o700 })
  const target = join(folderOf(context), storedName)
  const file = await open(`${target}.part`, 'wx', 0o600)
  try {
    await file.writeFile(context.keys.sealBytes(bytes))
    await file.sync()
  }
  finally { await file.close() }
  await rename(`${target}.part`, target)
}

const dataOf = ({ id, mediaType, byteCount, sha256 }: Upload) => ({ uploadId: id, mediaType, byteCount, sha256 })

async function openReferral(db: Database, referralId: string) {
  const referral = await db.selectFrom('referral').select(['id', 'siteId', 'patientId', 'state']).where('id', '=', referralId).executeTakeFirst()
  if (!referral) throw new DomainError('not-found')
  if (['answered', 'declined', 'cancelled', 'entered-in-error'].includes(referral.state)) throw new DomainError('wrong-state', { details: { state: referral.state } })
  return referral
}

async function insertUpload(context: ServiceContext, trx: Trx, referralId: string, file: Omit<Upload, 'id' | 'createdAt' | 'createdBy' | 'removedAt' | 'referralId' | 'studyId'>): Promise<UploadView> {
  const createdBy = context.actor.userId
  if (!createdBy) throw new DomainError('not-signed-in')
  const referral = await openReferral(trx, referralId)
  const { count } = await trx.selectFrom('upload').select(eb => eb.fn.countAll<number>().as('count')).where('referralId', '=', referralId).where('removedAt', 'is', null).executeTakeFirstOrThrow()
  if (count >= MOST_FILES) throw new DomainError('not-valid', { fields: [{ path: 'file', message: `A referral holds at most ${MOST_FILES} files.` }] })
  const row = await trx.insertInto('upload').values({ id: randomUUID(), referralId, studyId: null, ...file, createdAt: now(context), createdBy, removedAt: null }).returningAll().executeTakeFirstOrThrow()
  await recordAuditEvent(context, trx, { name: 'upload.added', subject: 'referral', subjectId: referralId, siteId: referral.siteId, patientId: referral.patientId, data: dataOf(row) })
  return { id: row.id, originalName: row.originalName, mediaType: row.mediaType, byteCount: row.byteCount, createdAt: row.createdAt, createdBy: context.actor.label }
}

/**
 * Keeps one letter or picture with a referral: checked by content, sealed, under a random name.
 * @throws DomainError 'too-large', 'wrong-file-type', 'no-space' (from the disk), 'wrong-state'
 */
export async function storeUpload(context: ServiceContext, { referralId, name, bytes }: { referralId: string, name: string, bytes: Uint8Array }): Promise<UploadView> {
  await openReferral(context.db, referralId)
  const checked = await checkUpload(bytes)
  const storedName = randomBytes(24).toString('hex')
  await writeSealed(context, storedName, checked.bytes)
  try {
    return await context.db.transaction().execute(trx => insertUpload(context, trx, referralId, {
      storedName, originalName: safeName(name, checked.extension), mediaType: checked.mediaType, byteCount: checked.bytes.length, sha256: sha256Hex(checked.bytes),
    }))
  }
  catch (error) {
    await rm(join(folderOf(context), storedName), { force: true })
    throw error
  }
}

/**
 * The bytes as they were kept; their hash is compared, so that a changed file is not shown as the letter it was.
 * @throws DomainError 'not-found'
 */
export async function readUpload(context: ServiceContext, id: string): Promise<{ bytes: Buffer, mediaType: string, name: string }> {
  const upload = await context.db.selectFrom('upload').innerJoin('referral', 'referral.id', 'upload.referralId').selectAll('upload').select(['referral.siteId', 'referral.patientId']).where('upload.id', '=', id).where('removedAt', 'is', null).executeTakeFirst()
  if (!upload) throw new DomainError('not-found')
  const bytes = context.keys.unsealBytes(await readFile(join(folderOf(context), upload.storedName)))
  if (sha256Hex(bytes) !== upload.sha256) throw new Error('A stored upload does not have the hash it was kept with.')
  recordView(context, { subject: 'upload', subjectId: id, siteId: upload.siteId, patientId: upload.patientId })
  return { bytes, mediaType: upload.mediaType, name: upload.originalName }
}

/** Takes a file away, bytes and all; that it was there, and its hash, stay in the trail. */
export async function removeUpload(context: ServiceContext, id: string): Promise<void> {
  const storedName = await context.db.transaction().execute(async (trx) => {
    const upload = await trx.selectFrom('upload').selectAll().where('id', '=', id).where('removedAt', 'is', null).executeTakeFirst()
    if (!upload?.referralId) throw new DomainError('not-found')
    const referral = await openReferral(trx, upload.referralId)
    await trx.updateTable('upload').set({ removedAt: now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'upload.removed', subject: 'referral', subjectId: referral.id, siteId: referral.siteId, patientId: referral.patientId, data: dataOf(upload) })
    return upload.storedName
  })
  await rm(join(folderOf(context), storedName), { force: true })
}
