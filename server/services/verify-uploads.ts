import { readFile } from 'node:fs/promises'
import { join } from 'node:path'
import { sha256Hex } from './canonical-json'
import type { ServiceContext } from './context'

export interface UploadsCheck { files: number, problems: string[] }

/** Every kept letter and picture against the hash it was kept with. Writes nothing. */
export async function verifyUploads({ db, keys, settings }: Pick<ServiceContext, 'db' | 'keys' | 'settings'>): Promise<UploadsCheck> {
  const uploads = await db.selectFrom('upload').leftJoin('referral', 'referral.id', 'upload.referralId').leftJoin('study', 'study.id', 'upload.studyId').select(['upload.id', 'storedName', 'sha256', 'referral.number as referralNumber', 'study.number as studyNumber']).where('removedAt', 'is', null).orderBy('referral.number').execute()
  const problems: string[] = []
  for (const { id, storedName, sha256, referralNumber, studyNumber } of uploads) {
    const named = `The file ${id} of ${studyNumber ?? referralNumber ?? 'no referral'}`
    const sealed = await readFile(join(settings.dataDir, 'uploads', storedName)).catch(() => null)
    if (!sealed) problems.push(`${named} is missing.`)
    else if (opened(keys, sealed) !== sha256) problems.push(`${named} was altered.`)
  }
  return { files: uploads.length, problems }
}

/** The hash of what was sealed; null when the sealed bytes were altered or another key sealed them. */
function opened(keys: ServiceContext['keys'], sealed: Uint8Array): string | null {
  try {
    return sha256Hex(keys.unsealBytes(sealed))
  }
  catch {
    return null
  }
}
