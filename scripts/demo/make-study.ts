import { randomUUID } from 'node:crypto'
import { loadStudy } from '#server/database/queries/studies'
import { bookReferral } from '#server/services/book-referral'
import { confirmStudy } from '#server/services/confirm-study'
import { actingAs, type ServiceContext } from '#server/services/context'
import { keepCheck } from '#server/services/keep-check'
import { assessStoredStudy } from '#server/services/assess-stored-study'
import { acceptReferral, receiveReferral } from '#server/services/move-referral'
import { saveBodySize } from '#server/services/save-body-size'
import { saveCells } from '#server/services/save-cells'
import { addPatient, changePatient } from '#server/services/save-patient'
import { addReferral } from '#server/services/save-referral'
import { changeRun } from '#server/services/save-run'
import { addTemperature } from '#server/services/save-temperature'
import { instantOf, localDate, localTime } from '#server/services/site-time'
import { noteArrival, startStudy } from '#server/services/start-study'
import { cautions, type ReferralInput, type Urgency } from '#shared/schemas/referral'
import type { SaveCell } from '#shared/schemas/bench'
import { makeRows, pictures, type ClinicalPicture } from './cases'
import type { DemoClock } from './clock'
import { actorFor, type DemoSite, type Organisation } from './make-organisation'
import { familyNames, mensNames, womensNames } from './people'
import { typed, type Random } from './random'

export interface Maker { context: ServiceContext, clock: DemoClock, random: Random, organisation: Organisation }
export interface MadeReferral { id: string, picture: ClinicalPicture, side: 'right' | 'left' | 'both', site: DemoSite, urgency: Urgency }

/** The services acting as a person who holds the role at the site. */
export async function as({ context, organisation }: Maker, role: string, siteId: string): Promise<ServiceContext> {
  const person = organisation.people.find(p => p.role === role && p.siteIds.includes(siteId))
  if (!person) throw new Error(`Nobody is ${role} there.`)
  return actingAs(context, await actorFor(context, person.id))
}

function pickPicture(random: Random): ClinicalPicture {
  let left = random.between(0, pictures.reduce((sum, p) => sum + p.weight, 0))
  return pictures.find(p => (left -= p.weight) < 0) ?? pictures[0]!
}

async function makePatient(maker: Maker, siteId: string): Promise<string> {
  const { random, clock } = maker
  const woman = random.chance(0.58)
  const age = Math.round(Math.min(78, Math.max(21, random.normal(54, 13))))
  const birth = new Date(clock.read())
  birth.setUTCFullYear(birth.getUTCFullYear() - age)
  birth.setUTCDate(birth.getUTCDate() - random.whole(1, 360))
  const patient = await addPatient(await as(maker, 'administrator', siteId), {
    familyName: random.pick(familyNames), givenName: random.pick(woman ? womensNames : mensNames), birthDate: birth.toISOString().slice(0, 10),
    sexForLimits: woman ? 'female' : 'male', gender: '', identifier: '', phone: `+00 55 ${random.whole(1000, 9999)}`, email: '', mailConsent: 'not-asked', interpreter: random.chance(0.03) ? 'Ukrainian' : '',
  })
  return patient.id
}

/** One physician of the demonstration gets the reports in German. */
const germanReader = 'Dr Annika Brodeur'

/** Somebody with a signed study by the same protocol, so that two studies can be compared. */
async function studiedBefore({ context }: Maker, protocol: string): Promise<string | undefined> {
  return (await context.db.selectFrom('study').select('patientId').where('state', '=', 'read').where('protocol', '=', protocol).orderBy('number').executeTakeFirst())?.patientId
}

/** A new referral as a draft; `complete` false leaves out what cannot be left out for booking. */
export async function makeReferral(maker: Maker, site: DemoSite, { complete = true, urgency, fromDesk = false, again = false }: { complete?: boolean, urgency?: Urgency, /** referred by the physician who has an account */ fromDesk?: boolean, /** somebody who was studied for the same question before */ again?: boolean } = {}): Promise<MadeReferral> {
  const { random, organisation } = maker
  const picture = pickPicture(random)
  const side = picture.side(random)
  const physician = organisation.physicians.find(each => fromDesk && each.hasDesk) ?? random.pick(organisation.physicians)
  const level = urgency ?? (random.chance(0.12) ? 'urgent' : 'routine')
  const input: ReferralInput = {
    patientId: (again ? await studiedBefore(maker, picture.protocol) : undefined) ?? await makePatient(maker, site.id), siteId: site.id, physicianId: physician.id, copyPhysicianIds: [],
    clinicalQuestion: complete || random.chance(0.5) ? random.pick(picture.question) : '', side: complete ? side : null, bodySite: picture.limb === 'foot' ? 'legs' : 'hands',
    symptoms: random.pick(picture.symptoms), onset: `${random.whole(2, 30)} months ago`, weakness: random.pick(['yes', 'no']), sensorySymptoms: 'yes', pain: random.pick(['yes', 'no']),
    examination: complete ? random.pick(picture.examination) : '', provisionalDiagnosis: picture.diagnosis, previousStudies: random.chance(0.1) ? 'One elsewhere some years ago, not at hand.' : 'None.',
    cautions: Object.fromEntries(cautions.map(c => [c.id, !complete && random.chance(0.4) ? 'not-asked' : c.id === 'anticoagulant' && random.chance(0.15) ? 'yes' : c.id === 'cardiac-device' && random.chance(0.04) ? 'yes' : 'no'])),
    urgency: level, urgencyReason: level === 'routine' ? '' : 'Weakness is getting worse from week to week.', needs: '', consentElectronic: 'yes', reportLanguage: physician.name === germanReader ? 'de' : 'en',
  }
  const { id } = await addReferral(await as(maker, 'administrator', site.id), input)
  return { id, picture, side, site, urgency: level }
}

export async function receiveAndAccept(maker: Maker, { id, picture, site }: MadeReferral): Promise<void> {
  const context = await as(maker, 'administrator', site.id)
  await receiveReferral(context, { id })
  maker.clock.forward(maker.random.whole(60, 1500))
  await acceptReferral(context, { id, protocol: picture.protocol })
}

/** Books at a moment; tries the next quarter of an hour while the room is taken. */
export async function book(maker: Maker, { id, site }: MadeReferral, moment: Date): Promise<Date> {
  const context = await as(maker, 'administrator', site.id)
  for (let step = 0; step < 60; step++) {
    const at = new Date(moment.getTime() + step * 15 * 60_000)
    const [date, time] = [localDate(at, site.timeZone), localTime(at, site.timeZone)]
    try {
      await bookReferral(context, { id, siteId: site.id, room: site.rooms[step % site.rooms.length]!, technologistId: null, date, time, minutes: 45, outsideHours: true })
      return instantOf(date, time, site.timeZone)
    }
    catch (error) {
      if ((error as { code?: string }).code !== 'double-booking') throw error
    }
  }
  throw new Error('No free slot was found.')
}

/** A patient who agreed to mails about appointments: the confirmation leaves as the demonstration starts. */
export async function agreeToMails(maker: Maker, { id, site }: MadeReferral): Promise<void> {
  const { db } = maker.context
  const patient = await db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').select(['patient.id', 'patient.revision', 'recordNumber']).where('referral.id', '=', id).executeTakeFirstOrThrow()
  await changePatient(await as(maker, 'administrator', site.id), { id: patient.id, revision: patient.revision, email: `${patient.recordNumber.toLowerCase()}@home.example`, mailConsent: 'yes' })
}

/** Arrival, confirmation, body size, temperatures and every planned run of the study. Ends in "recording". */
export async function record(maker: Maker, referral: MadeReferral, { runs = Infinity, cold = false } = {}): Promise<string> {
  const { random, clock } = maker
  const context = await as(maker, 'technologist', referral.site.id)
  await noteArrival(context, { referralId: referral.id })
  clock.forward(random.whole(3, 12))
  const { studyId } = await startStudy(context, { referralId: referral.id })
  await confirmStudy(context, { id: studyId, identifiers: ['name', 'birth-date'], side: referral.side, sideReason: '', cautionsRead: true })
  const woman = (await loadStudy(context.db, studyId))!.study.patient.sexForLimits === 'female'
  const heightCm = Math.round(random.normal(woman ? 164 : 177, 6))
  await saveBodySize(context, { id: studyId, heightCm, weightKg: Math.round(random.normal(27, 4) * (heightCm / 100) ** 2) })
  const segments = referral.picture.limb === 'both' ? ['hand', 'foot'] as const : [referral.picture.limb]
  for (const segment of segments) {
    for (const side of ['right', 'left'] as const) await addTemperature(context, { id: studyId, segment, side, celsius: typed(cold ? random.between(27, 29.5) : random.normal(segment === 'hand' ? 33.2 : 31.8, 0.5), 1), method: 'skin probe', warmed: false })
  }
  await typeRuns(maker, context, studyId, referral, runs)
  return studyId
}

async function typeRuns({ random, clock }: Maker, context: ServiceContext, studyId: string, { picture, side }: MadeReferral, most: number): Promise<void> {
  const focus = picture.id === 'ulnar-elbow' ? 'elbow' : picture.id === 'fibular-head' ? 'knee' : picture.id === 'polyneuropathy' ? 'length' : 'wrist'
  const { study, runRevisions } = (await loadStudy(context.db, studyId))!
  for (const [index, run] of study.runs.entries()) {
    if (index >= most) return
    clock.forward(random.whole(2, 5))
    const affected = side === 'both' || run.side === side
    const made = makeRows(run.technique, affected ? picture.severity(run.technique, random) : 0, random, focus)
    if (!made) {
      await changeRun(context, { id: studyId, runId: run.id, revision: runRevisions[run.id]!, notDoneBecause: 'Not needed for the question.' })
      continue
    }
    const cells: SaveCell[] = run.rows.flatMap(row => Object.entries(made[row.site] ?? {}).map(([field, entry]) => ({ saveId: randomUUID(), rowId: row.id, field, entry, revision: 0 })))
    if (cells.length) await saveCells(context, { id: studyId, cells })
  }
}

/** Keeps what the program questions, with a reason, as a technologist would before handing over. */
export async function keepQuestions(maker: Maker, siteId: string, studyId: string): Promise<void> {
  const context = await as(maker, 'technologist', siteId)
  const { assessment } = await assessStoredStudy(context, studyId)
  for (const remark of assessment.remarks) {
    if (remark.strength === 'check' && !remark.kept) await keepCheck(context, { id: studyId, key: remark.key, reason: 'Measured twice, same value.' })
  }
}
