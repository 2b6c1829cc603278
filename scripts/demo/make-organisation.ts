import { randomBytes } from 'node:crypto'
import { TOTP } from 'otpauth'
import { addPerson } from '#server/services/change-person'
import { addPhysician } from '#server/services/change-physician'
import { addPractice, noteHandedOver, renewPassphrase } from '#server/services/change-practice'
import { addEquipment } from '#server/services/equipment'
import { addSite, changeSite } from '#server/services/change-site'
import { actingAs, type Actor, type ServiceContext } from '#server/services/context'
import { currentHoldings } from '#server/services/current-holdings'
import { giveDeskAccess } from '#server/services/desk-access'
import { makeFirstAdministrator, writeFirstRunLink } from '#server/services/first-run'
import { confirmSecondFactor, startSecondFactor } from '#server/services/second-factor'
import { addDelegate } from '#server/services/practice-delegates'
import { decideRole, listRoleProposals } from '#server/services/role-proposals'
import { makeSetUpLink, setPassword } from '#server/services/set-up-link'
import { approveAdoption, proposeAdoption } from '#server/services/adopt-set'
import { referenceTable } from '#reference-tables/index'
import { rolesWithSecondFactor, type Role } from '#shared/permissions'
import { localDate } from '#server/services/site-time'
import { verifyOtherwise } from '#server/services/verify-address'
import { organisation, practices, sites, staff } from './people'
import type { DemoClock } from './clock'

export interface DemoPerson { key: string, id: string, role: Role, name: string, email: string, password: string, totpSecret?: string, siteIds: string[] }
export interface DemoPractice { id: string, name: string, passphrase: string }
export interface DemoSite { id: string, name: string, rooms: string[], timeZone: string }
export interface Organisation { sites: DemoSite[], people: DemoPerson[], practices: DemoPractice[], physicians: { id: string, name: string, practice: string, /** opens the desk with an account of the demonstration */ hasDesk: boolean }[] }

const addressOf = (name: string) => `${name.replace(/^Dr /, '').toLowerCase().replace(/[^a-z]+/g, '.')}@northmere.example`
/** 96 random bits, in a form that can be typed. */
const randomPassword = () => randomBytes(12).toString('base64url').replace(/[-_]/g, 'x').replace(/(.{4})(?=.)/g, '$1-')
const tokenOf = (link: string) => link.split('#')[1] ?? ''

/** The actor of a person as a request would have it. */
export async function actorFor(context: ServiceContext, id: string): Promise<Actor> {
  const user = await context.db.selectFrom('user').select(['name', 'inTraining']).where('id', '=', id).executeTakeFirstOrThrow()
  const holdings = await currentHoldings(context.db, [id], context.clock())
  return { userId: id, label: user.name, holdings: holdings.map(h => ({ siteId: h.siteId, role: h.role as Role })), inTraining: user.inTraining === 1 }
}

/** Organisation, sites and people, through the one-time links that anybody would use. */
export async function makeOrganisation(context: ServiceContext, clock: DemoClock): Promise<Organisation> {
  const people: DemoPerson[] = []
  const first = staff[0]
  const administrator: DemoPerson = { key: first.key, id: '', role: 'administrator', name: first.name, email: addressOf(first.name), password: randomPassword(), siteIds: [] }
  const link = await writeFirstRunLink({ ...context, settings: { ...context.settings, demonstration: false } })
  await makeFirstAdministrator(context, { token: tokenOf(link ?? ''), organisationName: organisation.name, siteName: sites[0]!.name, town: sites[0]!.town, timeZone: organisation.timeZone, name: first.name, email: administrator.email, password: administrator.password })
  await context.db.updateTable('organisation').set({ demonstration: 1, paperSize: organisation.paperSize }).execute()
  await context.db.updateTable('user').set({ emailConfirmedAt: clock.read().toISOString() }).execute()
  administrator.id = (await context.db.selectFrom('user').select('id').executeTakeFirstOrThrow()).id
  people.push(administrator)

  const asAdministrator = async () => actingAs(context, await actorFor(context, administrator.id))
  const made = await makeSites(await asAdministrator())
  administrator.siteIds = made.map(site => site.id)
  for (const person of staff.slice(1)) people.push(await makePerson(await asAdministrator(), clock, person, made))
  const director = people.find(person => person.role === 'medical-director')!
  await agreeToRoles(actingAs(context, await actorFor(context, director.id)))
  const { readers, ...directory } = await makeDirectory(await asAdministrator(), clock, made[0]!.id)
  return { sites: made, people: [...people, ...readers], ...directory }
}

/** The medical director agrees to the roles that one administrator alone cannot give. */
async function agreeToRoles(context: ServiceContext): Promise<void> {
  for (const { id } of await listRoleProposals(context)) await decideRole(context, { id, approve: true })
}

async function makeSites(context: ServiceContext): Promise<DemoSite[]> {
  const rest = { timeZone: organisation.timeZone }
  const existing = await context.db.selectFrom('site').select('id').executeTakeFirstOrThrow()
  await changeSite(context, existing.id, { ...sites[0]!, ...rest })
  const made: DemoSite[] = [{ id: existing.id, name: sites[0]!.name, rooms: sites[0]!.rooms, timeZone: organisation.timeZone }]
  for (const site of sites.slice(1)) made.push({ id: (await addSite(context, { ...site, ...rest })).id, name: site.name, rooms: site.rooms, timeZone: organisation.timeZone })
  for (const [index, site] of made.entries()) await makeEquipment(context, site.id, index)
  return made
}

/** Two devices at each site; one of the first site's is overdue, so that the banner is seen. */
async function makeEquipment(context: ServiceContext, siteId: string, index: number): Promise<void> {
  const year = context.clock().getUTCFullYear()
  await addEquipment(context, { siteId, name: `Recording machine ${index + 1}`, serial: `RM-${4100 + index}`, kind: 'amplifier', calibrationDue: index === 0 ? `${year}-06-30` : `${year + 3}-06-30`, safetyDue: `${year + 3}-03-31` })
  await addEquipment(context, { siteId, name: `Skin thermometer ${index + 1}`, serial: `ST-${70 + index}`, kind: 'thermometer', calibrationDue: `${year + 3}-09-30`, safetyDue: null })
}

async function makePerson(context: ServiceContext, clock: DemoClock, { key, name, credentials, roles, sites: where, ...rest }: (typeof staff)[number], made: readonly DemoSite[]): Promise<DemoPerson> {
  clock.forward(2)
  const email = addressOf(name)
  const siteIds = where.map(index => made[index]!.id)
  const id = await addPerson(context, { email, name, printedName: name, credentials, inTraining: 'inTraining' in rest, holdings: siteIds.flatMap(siteId => roles.map(role => ({ siteId, role }))) })
  const password = randomPassword()
  const answer = await makeSetUpLink(context, id, { resetSecondFactor: false })
  if (answer.waiting || answer.link === null) throw new Error('A first link needs no second person.')
  await setPassword(context, { token: tokenOf(answer.link), password })
  // Its mail goes to the fake alone, so the answer to it is written down here.
  await context.db.updateTable('user').set({ emailConfirmedAt: clock.read().toISOString() }).where('id', '=', id).execute()
  const person: DemoPerson = { key, id, role: roles[0], name, email, password, siteIds }
  if (!roles.some(role => rolesWithSecondFactor.includes(role))) return person
  const { secret } = await startSecondFactor(context, { id, email })
  const code = new TOTP({ secret }).generate({ timestamp: clock.read().getTime() })
  await confirmSecondFactor(actingAs(context, await actorFor(context, id)), { userId: id, password, code, currentCode: '', agent: 'demonstration' })
  // The set-up's session is nobody's.
  await context.db.updateTable('session').set({ endedAt: clock.read().toISOString(), endedBecause: 'set-up finished' }).where('userId', '=', id).where('endedAt', 'is', null).execute()
  return { ...person, totpSecret: secret }
}

/** Practices with a passphrase that was handed over, physicians whose address was checked; one of them opens the desk. */
async function makeDirectory(context: ServiceContext, clock: DemoClock, siteId: string) {
  const made: DemoPractice[] = []
  const physicians: Organisation['physicians'] = []
  const readers: DemoPerson[] = []
  for (const { name, town, physicians: people } of practices) {
    clock.forward(5)
    const { id } = await addPractice(context, { name, town, address: `1 Invented Street, ${town}`, phone: '+00 55 0999', deliveryMethod: 'encrypted-pdf' })
    const { passphrase } = await renewPassphrase(context, id)
    await noteHandedOver(context, id, { by: 'telephone', on: localDate(context.clock(), organisation.timeZone) })
    made.push({ id, name, passphrase })
    if (made.length === 1) await addDelegate(context, id, { name: 'Bettina Orr', duty: 'reception', phone: '+00 55 0997' })
    for (const person of people) {
      const email = `${addressOf(person.name).split('@')[0]}@${name.toLowerCase().replace(/[^a-z]+/g, '-')}.example`
      const physician = await addPhysician(context, { practiceId: id, name: person.name, title: 'MD', email, phone: '+00 55 0998' })
      await verifyOtherwise(context, physician.id, 'Telephoned the practice; the address was read back.')
      physicians.push({ id: physician.id, name: person.name, practice: name, hasDesk: 'key' in person })
      if ('key' in person) readers.push(await openDesk(context, { key: person.key, physicianId: physician.id, name: person.name, email, siteId }))
    }
  }
  return { practices: made, physicians, readers }
}

async function openDesk(context: ServiceContext, { key, physicianId, name, email, siteId }: { key: string, physicianId: string, name: string, email: string, siteId: string }): Promise<DemoPerson> {
  const { userId, link } = await giveDeskAccess(context, { physicianId, siteId, byMail: false })
  const password = randomPassword()
  await setPassword(context, { token: tokenOf(link ?? ''), password })
  return { key, id: userId, role: 'referring-physician', name, email, password, siteIds: [siteId] }
}

/** The set that every site uses, proposed by the administrator and approved by the medical director. */
export async function adoptSets(context: ServiceContext, { people, sites: made }: Organisation): Promise<void> {
  const by = (key: string) => people.find(person => person.key === key)!.id
  const setId = 'aanem-ndtf-2016'
  const version = referenceTable(setId)?.version ?? 1
  for (const site of made) {
    const effectiveOn = localDate(context.clock(), site.timeZone)
    const { id } = await proposeAdoption(actingAs(context, await actorFor(context, by('administrator'))), { siteId: site.id, setId, setVersion: version, techniques: null, effectiveOn })
    await approveAdoption(actingAs(context, await actorFor(context, by('medical-director'))), { id })
  }
}
