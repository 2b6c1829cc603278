import { openDB, type DBSchema, type IDBPDatabase } from 'idb'
import type { Sealed } from './seal'

/**
 * The browser's own database. Ids, counts and times stand open; everything that was typed or that belongs to a patient
 * is sealed.
 */
export interface OfflineTables extends DBSchema {
  /** The id of this device, made once. */
  device: { key: string, value: string }
  /** One queue for each tab in which a person typed; it stays until the server has acknowledged it. */
  queues: { key: string, value: StoredQueue, indexes: { owner: string } }
  /** The study a person had open last, so that the page comes back without the server. */
  studies: { key: string, value: { owner: string, studyId: string, at: string, sealed: Sealed } }
}
export interface StoredQueue { id: string, owner: string, studyId: string, tab: string, count: number, at: string, sealed: Sealed }
export type OfflineDatabase = IDBPDatabase<OfflineTables>

export async function openOfflineDatabase(name = 'orthodrome-offline'): Promise<OfflineDatabase> {
  return openDB<OfflineTables>(name, 1, {
    upgrade(db) {
      db.createObjectStore('device')
      db.createObjectStore('queues', { keyPath: 'id' }).createIndex('owner', 'owner')
      db.createObjectStore('studies', { keyPath: 'owner' })
    },
  })
}

/** The same id until the browser's data are cleared: with it the server gives the same key again. */
export async function deviceId(db: OfflineDatabase, make: () => string): Promise<string> {
  const tx = db.transaction('device', 'readwrite')
  const known = await tx.store.get('id')
  if (!known) await tx.store.put(make(), 'id')
  const id = known ?? await tx.store.get('id')
  await tx.done
  return id!
}
