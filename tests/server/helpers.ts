import { randomUUID } from 'node:crypto'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll } from 'vitest'
import { openDatabase } from '#server/database/connection'
import { migrateDatabase } from '#server/database/migrate'
import type { NewPatient, Patient } from '#server/database/tables/patient'
import type { NewPhysician, Physician } from '#server/database/tables/physician'
import type { NewPractice, Practice } from '#server/database/tables/practice'
import type { NewReferral, Referral } from '#server/database/tables/referral'
import type { NewSite, Site } from '#server/database/tables/site'
import type { NewUser, User } from '#server/database/tables/user'
import { actingAs, systemActor, type Log, type ServiceContext, type Settings } from '#server/services/context'
import { keysFrom } from '#server/services/keys'
import { nextNumber } from '#server/services/next-number'
import type { Role } from '#shared/permissions'

/** Everybody and everything made here is invented. */

/** Where the clock of every test stands at first. */
export const TEST_NOW = '2026-12-02T09:00:00.000Z'
const silent: Log = { info: () => undefined, warn: () => undefined, error: () => undefined }

export interface MadeUser extends User { holdings: { siteId: string, role: Role }[] }
/** A role at every site made so far, or at one. */
export type RoleWish = Role | { siteId: string, role: Role }

/**
 * A fresh migrated SQLite file with keys, a clock that tests move, and makers. Removed after the test file.
 * @example
 * const t = await testContext()
 * const site = await t.makeSite()
 * const user = await t.makeUser({ roles: ['technologist'] })
 * await saveCell(t.as(user), { … })
 */
export async function testContext(changes: Partial<Settings> = {}) {
  const dataDir = mkdtempSync(join(tmpdir(), 'orthodrome-test-'))
  const file = join(dataDir, 'orthodrome.sqlite')
  const db = openDatabase(file)
  await migrateDatabase(db)
  let instant = Date.parse(TEST_NOW)
  const settings: Settings = { dataDir, appOrigin: 'http://127.0.0.1:3000', smtpUrl: 'smtp://127.0.0.1:2525', mailFrom: 'Orthodrome <reports@orthodrome.example>', demonstration: false, idleMinutes: 20, trustProxy: false, ...changes }
  const context: ServiceContext = { db, keys: keysFrom(Buffer.alloc(32, 7)), clock: () => new Date(instant), actor: systemActor, settings, log: silent }

  const close = async () => {
    await db.destroy()
    rmSync(dataDir, { recursive: true, force: true })
  }
  afterAll(close)

  const clock = {
    set(at: string) { instant = Date.parse(at) },
    advance(ms: number) { instant += ms },
    minutes(count: number) { instant += count * 60_000 },
  }
  return { db, file, dataDir, context, settings, keys: context.keys, clock, as: (user: MadeUser) => asUser(context, user), ...makers(context) }
}
export type TestContext = Awaited<ReturnType<typeof testContext>>

function asUser(context: ServiceContext, user: MadeUser): ServiceContext {
  return actingAs(context, { userId: user.id, label: user.name, holdings: user.holdings, inTraining: user.inTraining === 1 })
}

function makers(context: ServiceContext) {
  const { db } = context
  const createdAt = TEST_NOW
  let count = 0
  const next = () => ++count

  async function makeOrganisation(): Promise<string> {
    const known = await db.selectFrom('organisation').select('id').executeTakeFirst()
    if (known) return known.id
    const id = randomUUID()
    await db.insertInto('organisation').values({ id, name: 'Invented Clinics', timeZone: 'Europe/Prague', disclaimer: 'This report supports a clinical decision and does not replace it.', createdAt }).execute()
    return id
  }

  async function makeSite(changes: Partial<NewSite> = {}): Promise<Site> {
    const organisationId = await makeOrganisation()
    const n = next()
    const site = await db.insertInto('site').values({ id: randomUUID(), organisationId, name: `Site ${n}`, town: `Town ${n}`, timeZone: 'Europe/Prague', createdAt, closedAt: null, ...changes }).returningAll().executeTakeFirstOrThrow()
    for (const [position, name] of ['Room 1', 'Room 2'].entries()) await db.insertInto('siteRoom').values({ id: randomUUID(), siteId: site.id, name, position, closedAt: null }).execute()
    return site
  }

  async function makeUser({ roles = [], ...changes }: Partial<NewUser> & { roles?: RoleWish[] } = {}): Promise<MadeUser> {
    const n = next()
    const values: NewUser = { id: randomUUID(), email: `person${n}@clinic.example`, name: `Person ${n}`, printedName: `Dr Person ${n}`, credentials: 'MD', passwordHash: null, totpSecretSealed: null, totpEnabledAt: createdAt, totpLastStep: null, lastSeenAt: null, deactivatedAt: null, createdAt, emailConfirmedAt: createdAt, ...changes }
    const user = await db.insertInto('user').values(values).returningAll().executeTakeFirstOrThrow()
    const sites = await db.selectFrom('site').select('id').execute()
    const holdings = roles.flatMap(wish => typeof wish === 'string' ? sites.map(site => ({ siteId: site.id, role: wish })) : [wish])
    for (const holding of holdings) await db.insertInto('roleHolding').values({ id: randomUUID(), userId: user.id, ...holding, startsOn: '2020-01-01', endsOn: null, grantedBy: null, createdAt }).execute()
    return { ...user, holdings }
  }

  async function makePatient(changes: Partial<NewPatient> = {}): Promise<Patient> {
    const recordNumber = await db.transaction().execute(trx => nextNumber(trx, 'patient', 2026))
    return await db.insertInto('patient').values({ id: randomUUID(), recordNumber, familyName: `Family${next()}`, givenName: 'Given', birthDate: '1974-03-14', sexForLimits: 'female', mergedInto: null, createdAt, createdBy: null, ...changes }).returningAll().executeTakeFirstOrThrow()
  }

  async function makePractice(changes: Partial<NewPractice> = {}): Promise<Practice> {
    const n = next()
    return await db.insertInto('practice').values({ id: randomUUID(), name: `Practice ${n}`, town: 'Town', passphraseSealed: context.keys.seal('seven invented words that nobody has used'), passphraseMadeAt: createdAt, passphraseHandedOverAt: createdAt, closedAt: null, createdAt, ...changes }).returningAll().executeTakeFirstOrThrow()
  }

  async function makePhysician(changes: Partial<NewPhysician> = {}): Promise<Physician> {
    const practiceId = changes.practiceId ?? (await makePractice()).id
    const n = next()
    return await db.insertInto('physician').values({ id: randomUUID(), name: `Physician ${n}`, email: `physician${n}@practice.example`, emailVerifiedAt: createdAt, leftOn: null, userId: null, createdAt, ...changes, practiceId }).returningAll().executeTakeFirstOrThrow()
  }

  /** Working hours for sites made here, which have none at first: without stated hours any time may be booked. */
  async function makeHours(siteId: string, opensAt = '08:00', closesAt = '17:00', weekdays = [1, 2, 3, 4, 5]): Promise<void> {
    for (const weekday of weekdays) await db.insertInto('siteHours').values({ siteId, weekday, opensAt, closesAt }).execute()
  }

  /** A referral in any state; give `siteId` and `createdBy`, or a site and a person are made. */
  async function makeReferral(changes: Partial<NewReferral> = {}): Promise<Referral> {
    const siteId = changes.siteId ?? (await makeSite()).id
    const patientId = changes.patientId ?? (await makePatient()).id
    const createdBy = changes.createdBy ?? (await makeUser()).id
    const physicianId = changes.physicianId === undefined ? (await makePhysician()).id : changes.physicianId
    const number = await db.transaction().execute(trx => nextNumber(trx, 'referral', 2026))
    return await db.insertInto('referral').values({ id: randomUUID(), number, state: 'received', stateSince: createdAt, clinicalQuestion: 'Median nerve at the wrist?', side: 'right', protocol: null, receivedAt: createdAt, createdAt, ...changes, siteId, patientId, createdBy, physicianId }).returningAll().executeTakeFirstOrThrow()
  }

  return { makeOrganisation, makeSite, makeHours, makeUser, makePatient, makePractice, makePhysician, makeReferral }
}
