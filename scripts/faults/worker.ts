// The part of npm run test:faults that is killed: signs what is ready and sends what is due, as the server does.
import { randomUUID } from 'node:crypto'
import { SmtpTransport } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import { actingAs, systemActor, type ServiceContext } from '#server/services/context'
import { flushViews } from '#server/services/record-view'
import { runOutboxOnce } from '#server/services/run-outbox'
import { signProven } from '#server/services/sign-report'
import { viewReading } from '#server/services/view-reading'
import { openServices } from '#server/utils/open-services'
import { isOpen } from '#shared/report/sign-checks'
import { meanings } from '#shared/schemas/report'
import { actorFor } from '../demo/make-organisation'
import { quietLog, scriptSettings } from '../settings'

const { settings, keyFile } = scriptSettings()
const mode = process.env.FAULTS_MODE === 'drain' ? 'drain' : 'work'
const most = Number(process.env.FAULTS_SIGN ?? '3')
let moment = Date.parse(process.env.FAULTS_CLOCK ?? '')
const started = performance.now()
const forward = (minutes: number) => moment += minutes * 60_000
const services = await openServices(settings, keyFile, quietLog, () => new Date(moment + performance.now() - started))
const context: ServiceContext = { ...services, actor: systemActor }
const transport = new SmtpTransport(settings.smtpUrl, { longestAttemptMs: 4_000, socketTimeoutMs: 1_500 })
const owner = randomUUID()
process.stdout.write('ready\n')

/** Signs one study that is ready, as its reader. @returns false when none is left that can be signed */
async function signOne(skipped: Set<string>): Promise<boolean> {
  const ready = await context.db.selectFrom('study').innerJoin('report', 'report.studyId', 'study.id').select(['study.id', 'study.readerId']).where('study.state', '=', 'handed-over').where('study.readerId', 'is not', null).where('study.id', 'not in', [...skipped]).orderBy('study.number').executeTakeFirst()
  if (!ready?.readerId) return false
  const reader = actingAs(context, await actorFor(context, ready.readerId))
  const view = await viewReading(reader, ready.id)
  if (view.checks.some(check => isOpen(check))) skipped.add(ready.id)
  else await signProven(reader, { studyId: ready.id, meaning: meanings[0], draftRevision: view.draftRevision, fingerprint: view.fingerprint })
  return true
}

const waiting = async () => (await context.db.selectFrom('outboxMail').select(eb => eb.fn.countAll<number>().as('count')).where('state', 'in', ['held', 'queued', 'failed', 'sending']).executeTakeFirstOrThrow()).count
const round = () => runOutboxOnce(context, { transport, owner })

/** Lives until it is killed: sends what the life before left, signs a few, and goes on sending. */
async function work(): Promise<void> {
  const skipped = new Set<string>()
  await round()
  for (let signed = 0; signed < most && await signOne(skipped); signed++) {
    // What was signed before leaves while the next is signed; its own hold is over two minutes later.
    await Promise.all([round(), signed + 1 < most ? signOne(skipped) : undefined])
    forward(2)
  }
  for (;;) {
    await round()
    forward(2)
    await new Promise(done => setTimeout(done, 50))
  }
}

/** Until nothing waits any more: a day and an hour at a time, which is longer than the longest pause between two attempts. */
async function drain(): Promise<void> {
  const skipped = new Set<string>()
  while (await signOne(skipped));
  for (let turns = 0; await waiting() > 0 && turns < 200; turns++) {
    forward(2)
    const { accepted, temporary, permanent, uncertain } = await round()
    if (accepted + temporary + permanent + uncertain === 0) forward(25 * 60)
  }
}

await (mode === 'drain' ? drain() : work())
transport.close()
await closePdfThread()
await flushViews(context)
await services.db.destroy()
