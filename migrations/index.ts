import type { Migration } from 'kysely'
import * as firstTables from './2026-12-01-first-tables'
import * as directoryChecks from './2026-12-10-directory-checks'
import * as arrival from './2026-12-11-arrival'
import * as policies from './2026-12-12-a-policies'
import * as benchday from './2026-12-12-benchday'
import * as dispatch from './2026-12-12-dispatch'
import * as intake from './2026-12-12-intake'
import * as intakeLists from './2026-12-12-intake-lists'
import * as kinds from './2026-12-12-kinds'
import * as offline from './2026-12-12-offline'
import * as ownSets from './2026-12-12-own-sets'
import * as patients from './2026-12-12-patients'
import * as people from './2026-12-12-people'
import * as peopleDirectory from './2026-12-12-people-directory'
import * as peopleRetention from './2026-12-12-people-retention'
import * as reading from './2026-12-12-reading'
import * as referringDesk from './2026-12-12-referring-desk'

/** Every migration, in order. Never edit one that has been released; add a new file and a line here. */
export const migrations: Record<string, Migration> = {
  '2026-12-01-first-tables': firstTables,
  '2026-12-10-directory-checks': directoryChecks,
  '2026-12-11-arrival': arrival,
  '2026-12-12-a-policies': policies,
  '2026-12-12-benchday': benchday,
  '2026-12-12-dispatch': dispatch,
  '2026-12-12-intake': intake,
  '2026-12-12-intake-lists': intakeLists,
  '2026-12-12-kinds': kinds,
  '2026-12-12-offline': offline,
  '2026-12-12-own-sets': ownSets,
  '2026-12-12-patients': patients,
  '2026-12-12-people': people,
  '2026-12-12-people-directory': peopleDirectory,
  '2026-12-12-people-retention': peopleRetention,
  '2026-12-12-reading': reading,
  '2026-12-12-referring-desk': referringDesk,
}
