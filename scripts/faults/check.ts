import type { Database } from '#server/database/connection'
import type { Seen } from './sink'

export interface Findings { wrong: string[], figures: Record<string, number> }

const whole = ['sent', 'given-up', 'uncertain', 'bounced', 'withdrawn']

/**
 * What must hold whatever happened: every signed version has a delivery for each of its recipients and each delivery one
 * mail; nothing waits for ever; what the server took is sent or uncertain, never twice; what is uncertain or given up is
 * an open task, and an uncertain one names its Message-ID.
 */
export async function checkOutcome(db: Database, seen: ReadonlyMap<string, Seen>): Promise<Findings> {
  const wrong: string[] = []
  const mails = await db.selectFrom('outboxMail').leftJoin('delivery', 'delivery.id', 'outboxMail.deliveryId').select(['outboxMail.id', 'messageId', 'outboxMail.state', 'delivery.state as deliveryState', 'delivery.id as deliveryId', 'delivery.reportVersionId', 'delivery.physicianId']).execute()
  const tasks = await db.selectFrom('task').select(['subjectId', 'kind', 'sentence']).where('doneAt', 'is', null).execute()
  for (const mail of mails) {
    const { accepted, swallowed } = seen.get(mail.messageId) ?? { accepted: 0, swallowed: 0 }
    const say = (text: string) => wrong.push(`${mail.messageId} (${mail.state}): ${text}`)
    if (!whole.includes(mail.state)) say('still waits')
    if (mail.deliveryId && mail.state !== mail.deliveryState && !(mail.state === 'sent' && mail.deliveryState === 'acknowledged')) say(`its delivery is ${mail.deliveryState}`)
    if (accepted + swallowed > 1) say(`reached the server ${accepted + swallowed} times`)
    if (mail.state === 'sent' && accepted !== 1) say('the server never took it')
    if (accepted + swallowed > 0 && !['sent', 'uncertain'].includes(mail.state)) say('the server took it')
    // A mail that carries no report has tasks of its own.
    const own = tasks.filter(task => task.subjectId === (mail.deliveryId ?? mail.id))
    if (mail.state === 'uncertain' && !own.some(task => ['delivery-uncertain', 'mail-uncertain'].includes(task.kind) && task.sentence.includes(mail.messageId))) say('no task names it')
    if (mail.state === 'given-up' && !own.some(task => ['delivery-given-up', 'mail-given-up'].includes(task.kind))) say('no task speaks of it')
  }
  const known = new Set(mails.map(mail => mail.messageId))
  for (const id of seen.keys()) if (!known.has(id)) wrong.push(`${id}: the server got a mail that nobody knows`)
  wrong.push(...await versionsWithoutDelivery(db))
  return { wrong, figures: { mails: mails.length, ...Object.fromEntries(whole.map(state => [state, mails.filter(mail => mail.state === state).length])) } }
}

/** Signed, and yet nobody to send it to: the transaction of the signature was torn. */
async function versionsWithoutDelivery(db: Database): Promise<string[]> {
  const versions = await db.selectFrom('reportVersion').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId').leftJoin('delivery', 'delivery.reportVersionId', 'reportVersion.id')
    .select(['report.number', 'study.state', 'study.referralId']).select(eb => eb.fn.count<number>('delivery.id').as('deliveries')).groupBy('reportVersion.id').execute()
  const wrong: string[] = []
  for (const version of versions) {
    const { count } = await db.selectFrom('referralCopy').select(eb => eb.fn.countAll<number>().as('count')).where('referralId', '=', version.referralId).executeTakeFirstOrThrow()
    if (version.deliveries !== count + 1) wrong.push(`${version.number}: ${version.deliveries} deliveries for ${count + 1} recipients`)
    if (version.state !== 'read') wrong.push(`${version.number}: signed, and its study is ${version.state}`)
  }
  const torn = await db.selectFrom('study').leftJoin('report', 'report.studyId', 'study.id').leftJoin('reportVersion', 'reportVersion.reportId', 'report.id').select('study.number').where('study.state', '=', 'read').where('reportVersion.id', 'is', null).execute()
  return [...wrong, ...torn.map(study => `${study.number}: read, and nothing is signed`)]
}
