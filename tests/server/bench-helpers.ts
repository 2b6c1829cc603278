import { randomUUID } from 'node:crypto'
import { acceptReferral, receiveReferral } from '#server/services/move-referral'
import { bookReferral } from '#server/services/book-referral'
import { confirmStudy } from '#server/services/confirm-study'
import { approveAdoption, proposeAdoption } from '#server/services/adopt-set'
import { addReferral } from '#server/services/save-referral'
import { saveCells } from '#server/services/save-cells'
import { startStudy } from '#server/services/start-study'
import { loadStudy } from '#server/database/queries/studies'
import { referralSchema, type ReferralInput } from '#shared/schemas/referral'
import type { Entry } from '#shared/schemas/study'
import type { TestContext } from './helpers'

/** One invented clinic with a person for each step, and the services called as those people call them. */
export async function clinic(t: TestContext) {
  const site = await t.makeSite()
  const at = site.id
  const admin = t.as(await t.makeUser({ roles: [{ siteId: at, role: 'administrator' }] }))
  const technologistUser = await t.makeUser({ roles: [{ siteId: at, role: 'technologist' }] })
  const technologist = t.as(technologistUser)
  const neurologist = t.as(await t.makeUser({ roles: [{ siteId: at, role: 'neurologist' }] }))
  const director = t.as(await t.makeUser({ roles: [{ siteId: at, role: 'medical-director' }] }))

  async function complete(changes: Partial<ReferralInput> = {}): Promise<ReferralInput> {
    const patientId = changes.patientId ?? (await t.makePatient()).id
    const physicianId = changes.physicianId === undefined ? (await t.makePhysician()).id : changes.physicianId
    return referralSchema.parse({ siteId: at, clinicalQuestion: 'Median nerve at the wrist?', side: 'right', symptoms: 'Tingling at night', examination: 'not examined', cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no' }, ...changes, patientId, physicianId })
  }
  const draft = async (changes: Partial<ReferralInput> = {}) => (await addReferral(admin, await complete(changes))).id
  async function accepted(changes: Partial<ReferralInput> = {}) {
    const id = await draft(changes)
    await receiveReferral(admin, { id })
    await acceptReferral(neurologist, { id, protocol: 'carpal-tunnel' })
    return id
  }
  const slot = (changes: object = {}) => ({ siteId: at, room: 'Room 1', technologistId: null, date: '2026-12-02', time: '14:30', minutes: 60, ...changes })
  let hour = 0
  async function booked(changes: Partial<ReferralInput> = {}) {
    const id = await accepted(changes)
    const day = 3 + Math.floor(hour / 20)
    await bookReferral(admin, { id, ...slot({ date: `2026-12-${String(day).padStart(2, '0')}`, time: `${String(hour++ % 20).padStart(2, '0')}:00` }) })
    return id
  }
  const started = async (changes: Partial<ReferralInput> = {}) => (await startStudy(technologist, { referralId: await booked(changes) })).studyId
  async function recording(changes: Partial<ReferralInput> = {}) {
    const id = await started(changes)
    await confirmStudy(technologist, { id, identifiers: ['name', 'birth-date'], side: changes.side ?? 'right', sideReason: '', cautionsRead: true })
    return id
  }
  async function study(id: string) {
    const stored = await loadStudy(t.db, id)
    if (!stored) throw new Error('There is no such study.')
    return stored
  }
  /** Types values into a run: one object per row, distal to proximal. */
  async function type(id: string, technique: string, side: 'right' | 'left', rows: Record<string, Entry>[]) {
    const stored = await study(id)
    const run = stored.study.runs.find(one => one.technique === technique && one.side === side)
    if (!run) throw new Error(`There is no ${side} ${technique}.`)
    const cells = rows.flatMap((row, index) => Object.entries(row).map(([field, entry]) => ({ saveId: randomUUID(), rowId: run.rows[index]!.id, field, entry, revision: stored.cellRevisions[`${run.rows[index]!.id}/${field}`] ?? 0 })))
    return saveCells(technologist, { id, cells })
  }
  async function adopt(setId: string) {
    const { id } = await proposeAdoption(neurologist, { siteId: at, setId, setVersion: 1, techniques: null, effectiveOn: '2026-12-02' })
    await approveAdoption(director, { id })
    return id
  }
  return { site, admin, technologist, technologistUser, neurologist, director, complete, draft, accepted, slot, booked, started, recording, study, type, adopt }
}
export type Clinic = Awaited<ReturnType<typeof clinic>>

export const eventNames = async (t: TestContext, subjectId: string) => (await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', subjectId).orderBy('seq').execute()).map(event => event.name)
