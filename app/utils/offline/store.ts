import type { StudyView } from '#shared/schemas/bench'
import type { SessionUser } from '#shared/schemas/user'
import { unsavedCells, unsentPart, type SaveQueue } from '../save-queue'
import type { OfflineDatabase, StoredQueue } from './database'
import { seal, unseal } from './seal'

/** A queue as it was left: in which study, typed in which tab. */
export interface KeptQueue { studyId: string, /** the study's number, for people */ number: string, tab: string, at: string, queue: SaveQueue }
export interface KeptStudy { user: SessionUser, view: StudyView }
type Place = Pick<KeptQueue, 'studyId' | 'tab'>

/**
 * What one person left on this device. Everything goes through that person's key: of another person's records nothing is
 * read, sent or counted.
 */
export function makeOfflineStore(db: OfflineDatabase, owner: string, key: CryptoKey, now: () => string = () => new Date().toISOString()) {
  const idOf = ({ studyId, tab }: Place) => `${owner}/${studyId}/${tab}`
  const own = () => db.getAllFromIndex('queues', 'owner', owner)

  async function open(stored: StoredQueue): Promise<KeptQueue | null> {
    const inside = await unseal<{ number: string, queue: SaveQueue }>(key, stored.id, stored.sealed)
    return inside && { studyId: stored.studyId, tab: stored.tab, at: stored.at, ...inside }
  }

  return {
    owner,
    key,
    /** Writes a queue; one with nothing in it is taken away. */
    async keep({ number, queue, ...place }: Place & { number: string, queue: SaveQueue }): Promise<void> {
      const count = unsavedCells(queue).length
      const id = idOf(place)
      if (count === 0) return db.delete('queues', id)
      const sealed = await seal(key, id, { number, queue: unsentPart(queue) })
      await db.put('queues', { id, owner, studyId: place.studyId, tab: place.tab, count, at: now(), sealed })
    },
    drop: (place: Place) => db.delete('queues', idOf(place)),
    async queues(): Promise<KeptQueue[]> {
      const opened = await Promise.all((await own()).map(open))
      return opened.filter(kept => kept !== null)
    },
    /** How many cells wait, without opening anything. */
    count: async (): Promise<number> => (await own()).reduce((sum, stored) => sum + stored.count, 0),

    async keepStudy(copy: KeptStudy): Promise<void> {
      await db.put('studies', { owner, studyId: copy.view.id, at: now(), sealed: await seal(key, `${owner}/${copy.view.id}`, copy) })
    },
    async lastStudy(studyId: string): Promise<KeptStudy | null> {
      const stored = await db.get('studies', owner)
      return stored?.studyId === studyId ? unseal<KeptStudy>(key, `${owner}/${studyId}`, stored.sealed) : null
    },
    dropStudy: () => db.delete('studies', owner),
  }
}
export type OfflineStore = ReturnType<typeof makeOfflineStore>
