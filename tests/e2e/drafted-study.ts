import { join } from 'node:path'
import { systemActor } from '#server/services/context'
import { flushViews } from '#server/services/record-view'
import { openServices } from '#server/utils/open-services'
import { reportDraftSchema, type ReportDraft } from '#shared/schemas/report'
import { DemoClock, plusDays, workingTime } from '../../scripts/demo/clock'
import type { DemoPerson, Organisation } from '../../scripts/demo/make-organisation'
import { makeFinished } from '../../scripts/demo/make-work'
import { Random } from '../../scripts/demo/random'
import { quietLog } from '../../scripts/settings'
import type { App } from './app'

interface Wish { practice: string, physician: string, copyTo: string }

/** People, sites and one physician of the demonstration, as its generator needs them. */
async function organisationOf(services: Awaited<ReturnType<typeof openServices>>, app: App, { practice, physician }: Wish): Promise<Organisation> {
  const { db } = services
  const sites = (await db.selectFrom('site').select(['id', 'name', 'timeZone']).where('name', '=', 'Harrowmere Clinic').execute()).map(site => ({ ...site, rooms: ['Room 1', 'Room 2'] }))
  const people: DemoPerson[] = []
  for (const role of ['technologist', 'neurologist', 'administrator'] as const) {
    const { id } = await db.selectFrom('user').select('id').where('email', '=', app.person(role).email).executeTakeFirstOrThrow()
    people.push({ ...app.person(role), key: role, id, role, siteIds: sites.map(site => site.id) })
  }
  const found = await db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId').select(['physician.id', 'physician.name', 'practice.name as practice']).where('physician.name', '=', physician).where('practice.name', '=', practice).executeTakeFirstOrThrow()
  return { sites, people, practices: [], physicians: [{ ...found, hasDesk: false }] }
}

/**
 * A study of the last days that waits for its signature, beside the running server: its impression calls one side
 * abnormal, and the referral names this physician and one copy.
 */
export async function draftedStudy(app: App, wish: Wish): Promise<{ studyId: string, draft: ReportDraft, line: ReportDraft['impression'][number] }> {
  const services = await openServices({ dataDir: app.dataDir, appOrigin: app.origin, smtpUrl: '', mailFrom: 'Orthodrome <reports@orthodrome.example>', demonstration: true, idleMinutes: 20, trustProxy: false }, `${join(app.dataDir)}.key`, quietLog)
  const clock = new DemoClock(new Date())
  const context = { ...services, clock: clock.read, actor: systemActor }
  const organisation = await organisationOf(services, app, wish)
  const copy = await services.db.selectFrom('physician').select('id').where('name', '=', wish.copyTo).executeTakeFirstOrThrow()
  try {
    for (let seed = 1; seed < 40; seed++) {
      const before = new Set((await services.db.selectFrom('study').select('id').execute()).map(row => row.id))
      await makeFinished({ context, clock, random: new Random(seed), organisation }, workingTime(plusDays(new Date(), -4), 8), { signed: false })
      const study = await services.db.selectFrom('study').innerJoin('report', 'report.studyId', 'study.id').select(['study.id', 'study.referralId', 'draftJson']).where('study.id', 'not in', [...before]).executeTakeFirst()
      const draft = study && reportDraftSchema.parse(JSON.parse(study.draftJson))
      const line = draft?.impression.find(each => each.abnormal && each.nerve && (each.side === 'right' || each.side === 'left'))
      if (!study || !draft || !line) continue
      await services.db.insertInto('referralCopy').values({ referralId: study.referralId, physicianId: copy.id }).execute()
      return { studyId: study.id, draft, line }
    }
    throw new Error('No study with one abnormal side came out.')
  }
  finally {
    await flushViews(context)
    await services.db.destroy()
  }
}
