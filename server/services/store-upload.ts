import { randomBytes, randomUUID } from 'node:crypto'
import { mkdir, open, readFile, rename, rm } from 'node:fs/promises'
import { join } from 'node:path'
import type { Database, Trx } from '#server/database/connection'
import type { Upload } from '#server/database/tables/upload'
import { DomainError } from '#shared/errors'
import type { UploadView } from '#shared/schemas/referral'
import { sha256Hex } from './canonical-json'
import { checkUpload } from './check-upload'
import { mayAt, now, type ServiceContext } from './context'
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

/** Where a file is kept: with a referral (a letter) or with a study (a photograph or print of its traces). */
export type UploadPlace = { referralId: string } | { studyId: string }
interface Owner { subject: 'referral' | 'study', id: string, siteId: string, patientId: string }

const closedReferral = ['answered', 'declined', 'cancelled', 'entered-in-error']
/** A signed study keeps the files that its reader saw. */
const closedStudy = ['read', 'entered-in-error']

async function openOwner(db: Database, place: UploadPlace): Promise<Owner> {
  const [subject, id] = 'studyId' in place ? ['study', place.studyId] as const : ['referral', place.referralId] as const
  const row = await db.selectFrom(subject).select(['id', 'siteId', 'patientId', 'state']).where('id', '=', id).executeTakeFirst()
  if (!row) throw new DomainError('not-found')
  if ((subject === 'study' ? closedStudy : closedReferral).includes(row.state)) throw new DomainError('wrong-state', { details: { state: row.state } })
  return { subject, id, siteId: row.siteId, patientId: row.patientId }
}

type Kept = Pick<Upload, 'storedName' | 'originalName' | 'mediaType' | 'byteCount' | 'sha256' | 'letterId'>

/** Whoever sends a file is signed in, or holds the link of a letter that is open. */
async function insertUpload(context: ServiceContext, trx: Trx, place: UploadPlace, file: Kept): Promise<UploadView> {
  const createdBy = context.actor.userId
  if (!createdBy && !file.letterId) throw new DomainError('not-signed-in')
  const owner = await openOwner(trx, place)
  const { count } = await trx.selectFrom('upload').select(eb => eb.fn.countAll<number>().as('count')).where(owner.subject === 'study' ? 'studyId' : 'referralId', '=', owner.id).where('removedAt', 'is', null).executeTakeFirstOrThrow()
  if (count >= MOST_FILES) throw new DomainError('not-valid', { fields: [{ path: 'file', message: `A ${owner.subject} holds at most ${MOST_FILES} files.` }] })
  const row = await trx.insertInto('upload').values({ id: randomUUID(), referralId: null, studyId: null, ...place, ...file, createdAt: now(context), createdBy, removedAt: null }).returningAll().executeTakeFirstOrThrow()
  await recordAuditEvent(context, trx, { name: 'upload.added', subject: owner.subject, subjectId: owner.id, siteId: owner.siteId, patientId: owner.patientId, data: dataOf(row) })
  return { id: row.id, originalName: row.originalName, mediaType: row.mediaType, byteCount: row.byteCount, createdAt: row.createdAt, createdBy: context.actor.label }
}

/**
 * Keeps one letter or picture with a referral or a study: checked by content, sealed, under a random name.
 * @throws DomainError 'too-large', 'wrong-file-type', 'no-space' (from the disk), 'wrong-state'
 */
export async function storeUpload(context: ServiceContext, { name, bytes, letterId = null, ...place }: UploadPlace & { name: string, bytes: Uint8Array, /** the letter whose link it came by */ letterId?: string | null }): Promise<UploadView> {
  await openOwner(context.db, place)
  const checked = await checkUpload(bytes)
  const storedName = randomBytes(24).toString('hex')
  await writeSealed(context, storedName, checked.bytes)
  try {
    return await context.db.transaction().execute(trx => insertUpload(context, trx, place, {
      storedName, originalName: safeName(name, checked.extension), mediaType: checked.mediaType, byteCount: checked.bytes.length, sha256: sha256Hex(checked.bytes), letterId,
    }))
  }
  catch (error) {
    await rm(join(folderOf(context), storedName), { force: true })
    throw error
  }
}

const placeOf = ({ studyId, referralId }: Upload): UploadPlace => studyId ? { studyId } : { referralId: referralId ?? '' }

/** Traces are measured data: who may see a letter may not see them for that alone. */
async function ownerToRead(context: ServiceContext, upload: Upload): Promise<{ siteId: string, patientId: string }> {
  const owner = upload.studyId
    ? await context.db.selectFrom('study').select(['siteId', 'patientId']).where('id', '=', upload.studyId).executeTakeFirstOrThrow()
    : await context.db.selectFrom('referral').select(['siteId', 'patientId']).where('id', '=', upload.referralId).executeTakeFirstOrThrow()
  if (upload.studyId && !mayAt(context.actor, 'study.read', owner.siteId)) throw new DomainError('not-allowed')
  return owner
}

/**
 * The bytes as they were kept; their hash is compared, so that a changed file is not shown as the letter it was.
 * @throws DomainError 'not-found'
 */
export async function readUpload(context: ServiceContext, id: string): Promise<{ bytes: Buffer, mediaType: string, name: string }> {
  const upload = await context.db.selectFrom('upload').selectAll().where('id', '=', id).where('removedAt', 'is', null).executeTakeFirst()
  if (!upload) throw new DomainError('not-found')
  const owner = await ownerToRead(context, upload)
  const bytes = context.keys.unsealBytes(await readFile(join(folderOf(context), upload.storedName)))
  if (sha256Hex(bytes) !== upload.sha256) throw new Error('A stored upload does not have the hash it was kept with.')
  recordView(context, { subject: 'upload', subjectId: id, siteId: owner.siteId, patientId: owner.patientId })
  return { bytes, mediaType: upload.mediaType, name: upload.originalName }
}

/** Takes a file away, bytes and all; that it was there, and its hash, stay in the trail. */
export async function removeUpload(context: ServiceContext, id: string): Promise<void> {
  const storedName = await context.db.transaction().execute(async (trx) => {
    const upload = await trx.selectFrom('upload').selectAll().where('id', '=', id).where('removedAt', 'is', null).executeTakeFirst()
    if (!upload) throw new DomainError('not-found')
    const owner = await openOwner(trx, placeOf(upload))
    await trx.updateTable('upload').set({ removedAt: now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'upload.removed', subject: owner.subject, subjectId: owner.id, siteId: owner.siteId, patientId: owner.patientId, data: dataOf(upload) })
    return upload.storedName
  })
  await rm(join(folderOf(context), storedName), { force: true })
}
