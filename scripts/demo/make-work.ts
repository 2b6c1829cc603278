import { handOverStudy, stopStudy } from '#server/services/hand-over-study'
import { cancelReferral, declineReferral, receiveReferral, returnReferral } from '#server/services/move-referral'
import { noteNotAttended } from '#server/services/book-referral'
import { noteArrival } from '#server/services/start-study'
import { returnStudy } from '#server/services/take-study'
import { plusDays, workingTime } from './clock'
import { deliverAsInThePast } from './deliver'
import { agreeToMails, as, book, keepQuestions, makeReferral, receiveAndAccept, record, type MadeReferral, type Maker } from './make-study'
import { draft, sign } from './read-study'

/** One finished study: from the referral two weeks before to the acknowledged report, or to the draft that waits for its signature. */
export async function makeFinished(maker: Maker, day: Date, { fromDesk = false, signed = true } = {}): Promise<void> {
  const { clock, random, organisation } = maker
  const site = random.pick(organisation.sites)
  clock.set(plusDays(day, -random.whole(6, 20)))
  const referral = await makeReferral(maker, site, { fromDesk })
  clock.forward(random.whole(5, 60))
  await receiveAndAccept(maker, referral)
  const starts = await book(maker, referral, workingTime(day, random.whole(7, 13), random.pick([0, 15, 30, 45])))
  clock.set(starts)
  const studyId = await record(maker, referral, { cold: random.chance(0.05) })
  await keepQuestions(maker, site.id, studyId)
  await handOverStudy(await as(maker, 'technologist', site.id), { id: studyId, note: '' })
  clock.forward(random.whole(20, 1800))
  await draft(maker, referral, studyId)
  if (!signed) return
  await sign(maker, referral, studyId)
  await deliverAsInThePast(maker)
}

/** Where a piece of present work stops. */
export const stages = ['draft', 'received', 'returned', 'accepted', 'booked', 'did-not-attend', 'declined', 'cancelled', 'arrived', 'recording', 'stopped', 'handed-over', 'returned-to-bench', 'drafted', 'signed'] as const
export type Stage = (typeof stages)[number]

/** Work of the last days that stands somewhere on its way. `today` is the moment the demonstration is made. */
export async function makePresent(maker: Maker, stage: Stage, today: Date): Promise<void> {
  const { clock, random, organisation } = maker
  const site = stage === 'arrived' || stage === 'recording' ? organisation.sites[0]! : random.pick(organisation.sites)
  clock.set(plusDays(today, -random.whole(7, 12)))
  const referral = await makeReferral(maker, site, { complete: stage !== 'draft', fromDesk: stage === 'returned', again: stage === 'handed-over', ...(random.chance(0.25) ? { urgency: random.pick(['urgent', 'same-week'] as const) } : {}) })
  if (stage === 'draft') return
  await moveAtIntake(maker, referral, stage, today)
}

async function moveAtIntake(maker: Maker, referral: MadeReferral, stage: Stage, today: Date): Promise<void> {
  const { clock, random } = maker
  const context = await as(maker, 'administrator', referral.site.id)
  clock.forward(30)
  const id = referral.id
  if (['received', 'returned', 'declined'].includes(stage)) {
    await receiveReferral(context, { id })
    clock.forward(random.whole(60, 600))
    if (stage === 'returned') await returnReferral(context, { id, reasons: ['symptoms', 'other'], note: 'Which hand is worse, and since when?' })
    if (stage === 'declined') await declineReferral(context, { id, reason: 'The question needs imaging first; advice was given by telephone.' })
    return
  }
  await receiveAndAccept(maker, referral)
  if (stage === 'accepted') return
  if (stage === 'cancelled') return await cancelReferral(context, { id, reason: 'The patient feels better and called it off.' })
  if (stage === 'booked') await agreeToMails(maker, referral)
  const day = stage === 'booked' ? plusDays(today, random.whole(0, 9)) : ['arrived', 'recording'].includes(stage) ? today : plusDays(today, -random.whole(1, 4))
  const starts = await book(maker, referral, stage === 'booked' ? forwardWorkingTime(day, random.whole(8, 14)) : workingTime(day, random.whole(7, 12)))
  if (stage === 'booked') return
  // Today's work began a while ago, whatever the hour is now.
  clock.set(starts < today ? starts : new Date(today.getTime() - random.whole(30, 70) * 60_000))
  if (stage === 'did-not-attend') {
    clock.forward(60)
    return await noteNotAttended(context, { id, reason: 'Did not come, could not be reached by telephone.' })
  }
  if (stage === 'arrived') return await noteArrival(await as(maker, 'technologist', referral.site.id), { referralId: id })
  await moveAtBench(maker, referral, stage)
}

function forwardWorkingTime(moment: Date, hour: number): Date {
  const day = new Date(moment)
  while (day.getUTCDay() === 0 || day.getUTCDay() === 6) day.setUTCDate(day.getUTCDate() + 1)
  day.setUTCHours(hour, 0, 0, 0)
  return day
}

async function moveAtBench(maker: Maker, referral: MadeReferral, stage: Stage): Promise<void> {
  const { clock, random } = maker
  const technologist = await as(maker, 'technologist', referral.site.id)
  const studyId = await record(maker, referral, stage === 'recording' || stage === 'stopped' ? { runs: 2 } : {})
  if (stage === 'recording') return
  if (stage === 'stopped') return await stopStudy(technologist, { id: studyId, reason: 'The patient asked to stop because of pain.' })
  await keepQuestions(maker, referral.site.id, studyId)
  await handOverStudy(technologist, { id: studyId, note: random.chance(0.5) ? 'Tolerated well.' : '' })
  if (stage === 'handed-over') return
  clock.forward(random.whole(10, 90))
  await draft(maker, referral, studyId)
  if (stage === 'drafted') return
  if (stage === 'returned-to-bench') return await returnStudy(await as(maker, 'neurologist', referral.site.id), { id: studyId, question: 'Can the distal latency be measured again with the cathode checked?', runId: null })
  await sign(maker, referral, studyId)
}
