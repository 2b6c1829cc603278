import type { Database } from '#server/database/connection'
import type { LedgerCheck, ChainCheck } from '#shared/schemas/user'
import type { Keys } from './keys'
import { AUDIT_HEAD, auditHead, auditLinkText, CHAIN_START, headProof } from './record-audit-event'
import { VIEW_HEAD, viewLinkText } from './record-view'

const BATCH = 1_000
const MOST_PROBLEMS = 20
interface Link { seq: number, previousMac: string, mac: string }

/**
 * Recomputes both chains from their first link: a changed, removed, inserted or reordered link shows, and so does a cut-off
 * end, since the proof of the last link needs the key. What this cannot see is a whole older copy of the database put
 * back; the heads printed in reports and kept with backups show that.
 * Reads in batches and lets other requests in between; writes nothing, so a copy opened for reading will do.
 */
export async function checkChains(context: { db: Database, keys: Pick<Keys, 'auditMac' | 'viewMac'> }): Promise<Omit<LedgerCheck, 'at' | 'reports'>> {
  const acts = await verifyChain(context.db, AUDIT_HEAD, context.keys.auditMac, after => actsAfter(context.db, after), link => context.keys.auditMac(auditLinkText(link)))
  const views = await verifyChain(context.db, VIEW_HEAD, context.keys.viewMac, after => viewsAfter(context.db, after), link => context.keys.viewMac(viewLinkText(link)))
  await checkPrintedHeads(context.db, acts)
  return { acts, views, head: await auditHead(context.db) }
}

function actsAfter(db: Database, seq: number) {
  return db.selectFrom('auditEvent').selectAll().where('seq', '>', seq).orderBy('seq').limit(BATCH).execute()
}
function viewsAfter(db: Database, seq: number) {
  return db.selectFrom('viewEvent').selectAll().where('seq', '>', seq).orderBy('seq').limit(BATCH).execute()
}

async function verifyChain<L extends Link>(db: Database, headKey: string, mac: (text: string) => string, read: (after: number) => Promise<L[]>, recompute: (link: L) => string): Promise<ChainCheck> {
  const problems: string[] = []
  // The proof is read first: links added while this runs lie beyond it and are checked like the others.
  const stored = (await db.selectFrom('meta').select('value').where('key', '=', headKey).executeTakeFirst())?.value
  const expectedSeq = stored ? Number(stored.split(':')[0]) : 0
  let last = { seq: 0, mac: CHAIN_START }
  let links = 0
  let headSeen = stored === undefined
  for (let batch = await read(0); batch.length > 0; batch = await read(last.seq)) {
    for (const link of batch) {
      const problem = problemWith(link, last, recompute(link))
      if (problem && problems.length < MOST_PROBLEMS) problems.push(problem)
      if (link.seq === expectedSeq) headSeen = headProof(mac, link.seq, link.mac) === stored
      last = { seq: link.seq, mac: link.mac }
      links++
    }
    await new Promise(resolve => setImmediate(resolve))
  }
  if (!headSeen) problems.push(`The end of the chain is not the one last written: links up to number ${expectedSeq} should exist.`)
  if (links > 0 && stored === undefined) problems.push('The proof of the last link is missing.')
  return { links, intact: problems.length === 0, problems }
}

function problemWith(link: Link, last: { seq: number, mac: string }, recomputed: string): string | null {
  if (link.seq !== last.seq + 1) return `Links are missing between number ${last.seq} and number ${link.seq}.`
  if (link.previousMac !== last.mac) return `Number ${link.seq} does not follow the one before it.`
  return link.mac === recomputed ? null : `Number ${link.seq} was changed or was not written by this program.`
}

/** Every signed version names the head of its moment: each of them must still be a link. */
async function checkPrintedHeads(db: Database, acts: ChainCheck): Promise<void> {
  const missing = await db.selectFrom('reportVersion').leftJoin('auditEvent', 'auditEvent.mac', 'reportVersion.auditHead')
    .where('auditEvent.seq', 'is', null).where('reportVersion.auditHead', '!=', CHAIN_START).select('reportVersion.id').limit(MOST_PROBLEMS).execute()
  for (const version of missing) acts.problems.push(`The head printed in report version ${version.id} is not part of the chain.`)
  acts.intact = acts.problems.length === 0
}
