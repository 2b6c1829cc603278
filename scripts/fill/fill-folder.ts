import Sqlite from 'better-sqlite3'
import { join } from 'node:path'
import { systemActor, type Settings } from '#server/services/context'
import { openServices } from '#server/utils/open-services'
import type { Policy } from '#shared/calculations/types'
import { plusDays, workingTime } from '../demo/clock'
import { Random } from '../demo/random'
import { quietLog } from '../settings'
import { AuditChain } from './audit-chain'
import { makePattern, type Pattern } from './pattern'
import { readSetting, type Place, type Setting } from './setting'
import { writeFinishedStudy, type Desk } from './write-study'
import { Counters, Writer } from './writer'

/** A transaction holds the write lock for well under a second: a server beside it goes on. */
const BATCH = 2_000
const PATTERNS = 24
const YEARS = 10

export interface Filling { settings: Settings, keyFile: string, studies: number, seed: number, today: Date, progress?: (done: number) => void }

/**
 * Adds finished studies of ten years to a demonstration, each with patient, referral, booking, values of one run, signed
 * report and delivery. Every signature has its link in the audit trail, so that `npm run verify` holds for filled
 * studies without an exception; all other acts stand in one event that says how many were filled.
 * @throws when the data folder is not a demonstration
 */
export async function fillFolder({ settings, keyFile, studies, seed, today, progress }: Filling): Promise<void> {
  const { db, keys } = await openServices(settings, keyFile, quietLog)
  const setting = await readSetting(db).finally(() => db.destroy())
  const database = openForFilling(join(settings.dataDir, 'orthodrome.sqlite'))
  try {
    const desk: Desk = { writer: new Writer(database), counters: new Counters(database), chain: new AuditChain(database, keys), random: new Random(seed) }
    const patternFor = patterns(setting, desk.random)
    const inOne = database.transaction((act: () => void) => {
      desk.chain.begin()
      act()
      desk.counters.keep()
      desk.chain.keep()
    }).immediate
    for (let done = 0; done < studies; done += BATCH) {
      inOne(() => {
        for (let index = done; index < Math.min(studies, done + BATCH); index++) writeOne(desk, setting, patternFor, startOf(index, studies, today, desk.random))
      })
      progress?.(Math.min(studies, done + BATCH))
    }
    inOne(() => desk.chain.add(desk.writer, { at: today.toISOString(), actorId: systemActor.userId, actorLabel: systemActor.label, siteId: null, name: 'demonstration.filled', subject: 'organisation', subjectId: setting.organisation.id, patientId: null, data: { studies } }))
    database.pragma('wal_checkpoint(TRUNCATE)')
    database.exec('analyze')
  }
  finally {
    database.close()
  }
}

/** As the server's connection, with more memory for the indexes. */
function openForFilling(file: string): Sqlite.Database {
  const database = new Sqlite(file)
  for (const pragma of ['journal_mode = WAL', 'synchronous = FULL', 'foreign_keys = ON', 'recursive_triggers = ON', 'busy_timeout = 10000', 'temp_store = MEMORY', 'cache_size = -262144']) database.pragma(pragma)
  return database
}

/** In the order of their days, so that numbers rise with time; the last one is a week old and wholly done. */
function startOf(index: number, studies: number, today: Date, random: Random): Date {
  const daysBack = 7 + Math.round((1 - (index + 1) / studies) * YEARS * 365)
  return workingTime(plusDays(today, -daysBack), random.whole(7, 14), random.pick([0, 15, 30, 45]))
}

function writeOne(desk: Desk, setting: Setting, patternFor: (place: Place, day: string) => Pattern, starts: Date): void {
  const place = desk.random.pick(setting.places)
  writeFinishedStudy(desk, patternFor(place, starts.toISOString().slice(0, 10)), desk.random.pick(setting.physicians), starts)
}

/** A few patterns for each site and each policy it had; made when they are first needed. */
function patterns(setting: Setting, random: Random): (place: Place, day: string) => Pattern {
  const made = new Map<Policy, Pattern[]>()
  return (place, day) => {
    const policy = place.policyOn(day)
    const there = made.get(policy) ?? []
    made.set(policy, there)
    if (there.length < PATTERNS) there.push(makePattern(setting, place, policy, random))
    return random.pick(there)
  }
}
