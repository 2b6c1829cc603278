import type { RouteNode } from '#shared/schemas/referral'
import { stateLabels, type DeliveryState } from '#shared/states'
import type { Database } from '../connection'

type WentBack = RouteNode['wentBack']
type Facts = NonNullable<Awaited<ReturnType<typeof factsOf>>>

/** Where a referral stands on its way, since when and with whom; what went back is said with its reason. */
export async function routeOf(db: Database, referralId: string): Promise<RouteNode[]> {
  const facts = await factsOf(db, referralId)
  return facts ? [intakeNode(facts), benchNode(facts), readingNode(facts), dispatchNode(facts)] : []
}

async function factsOf(db: Database, referralId: string) {
  const referral = await db.selectFrom('referral').innerJoin('site', 'site.id', 'referral.siteId').select(['referral.id', 'state', 'stateSince', 'site.name as siteName']).where('referral.id', '=', referralId).executeTakeFirst()
  if (!referral) return undefined
  const study = await db.selectFrom('study').leftJoin('user as technologist', 'technologist.id', 'study.technologistId').leftJoin('user as reader', 'reader.id', 'study.readerId')
    .select(['study.id', 'study.state', 'study.stateSince', 'handedOverAt', 'takenAt', 'study.createdAt', 'technologist.name as technologist', 'reader.name as reader'])
    .where('referralId', '=', referralId).where('study.state', '<>', 'entered-in-error').orderBy('study.createdAt', 'desc').executeTakeFirst()
  const versions = study
    ? await db.selectFrom('reportVersion').innerJoin('report', 'report.id', 'reportVersion.reportId').select(['reportVersion.id', 'version', 'status', 'reason', 'signedAt', 'signedName']).where('report.studyId', '=', study.id).orderBy('version').execute()
    : []
  const latest = versions.at(-1)
  const deliveries = latest
    ? await db.selectFrom('delivery').innerJoin('physician', 'physician.id', 'delivery.physicianId').select(['delivery.state', 'stateSince', 'physician.name']).where('reportVersionId', '=', latest.id).orderBy('delivery.createdAt').execute()
    : []
  const changes = await db.selectFrom('stateChange').select(['subject', 'at', 'fromState', 'toState', 'reason'])
    .where(eb => eb.or([eb.and([eb('subject', '=', 'referral'), eb('subjectId', '=', referralId)]), ...(study ? [eb.and([eb('subject', '=', 'study'), eb('subjectId', '=', study.id)])] : [])]))
    .where('toState', 'in', ['returned', 'did-not-attend']).orderBy('id').execute()
  return { referral, study, versions, latest, deliveries, changes }
}

const back = (facts: Facts, subject: 'referral' | 'study'): WentBack =>
  facts.changes.filter(change => change.subject === subject).map(({ at, reason, toState }) => ({ at, reason: reason || stateLabels[toState as 'returned'] }))

function intakeNode(facts: Facts): RouteNode {
  const { referral, study } = facts
  const done = referral.state === 'attended' || referral.state === 'answered'
  return { id: 'intake', label: 'Intake', state: done ? 'done' : 'here', words: stateLabels[done ? 'attended' : referral.state], since: done ? study?.createdAt ?? referral.stateSince : referral.stateSince, withWhom: referral.siteName, wentBack: back(facts, 'referral') }
}

function benchNode(facts: Facts): RouteNode {
  const { study } = facts
  const node = { id: 'bench', label: 'Bench', wentBack: back(facts, 'study') } as const
  if (!study) return { ...node, state: 'ahead', words: '', since: null, withWhom: null }
  const done = study.state === 'handed-over' || study.state === 'read'
  return { ...node, state: done ? 'done' : 'here', words: stateLabels[done ? 'handed-over' : study.state], since: done ? study.handedOverAt : study.stateSince, withWhom: study.technologist }
}

function readingNode(facts: Facts): RouteNode {
  const { study, latest, versions } = facts
  const wentBack = versions.slice(1).map(version => ({ at: version.signedAt, reason: `${stateLabels[version.status]}: ${version.reason}` }))
  const node = { id: 'reading', label: 'Reading', wentBack } as const
  if (latest) return { ...node, state: 'done', words: stateLabels[latest.status], since: latest.signedAt, withWhom: latest.signedName }
  if (study?.state !== 'handed-over') return { ...node, state: 'ahead', words: '', since: null, withWhom: null }
  return { ...node, state: 'here', words: study.reader ? 'being read' : 'waits for a reader', since: study.takenAt ?? study.handedOverAt, withWhom: study.reader }
}

/** What still needs someone comes first. */
const deliveryOrder: DeliveryState[] = ['uncertain', 'given-up', 'bounced', 'failed', 'held', 'queued', 'sending', 'sent', 'acknowledged', 'by-hand', 'withdrawn']

function dispatchNode({ latest, deliveries }: Facts): RouteNode {
  const node = { id: 'dispatch', label: 'Dispatch', wentBack: [] as WentBack } as const
  const [first] = deliveries.toSorted((a, b) => deliveryOrder.indexOf(a.state) - deliveryOrder.indexOf(b.state))
  if (!latest) return { ...node, state: 'ahead', words: '', since: null, withWhom: null }
  if (!first) return { ...node, state: 'here', words: 'no recipient yet', since: latest.signedAt, withWhom: null }
  const done = first.state === 'acknowledged' || first.state === 'by-hand'
  return { ...node, state: done ? 'done' : 'here', words: first.state === 'sent' ? 'sent, not acknowledged yet' : stateLabels[first.state], since: first.stateSince, withWhom: deliveries.map(delivery => delivery.name).join(', ') }
}
