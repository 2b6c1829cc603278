import type { Database, Trx } from '#server/database/connection'
import { policyInForce } from '#server/database/queries/policies'
import { protocols, type Protocol } from '#shared/protocols'
import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { localDate } from './site-time'

/** The protocols in force at a site today, with the version of their list; version 0 is the list that the program ships. */
export async function protocolsAt(context: ServiceContext, db: Database, { siteId }: { siteId: string }): Promise<{ version: number, protocols: Protocol[] }> {
  const site = await db.selectFrom('site').select('timeZone').where('id', '=', siteId).executeTakeFirst()
  if (!site) throw new DomainError('not-found')
  const { version, body } = await policyInForce(db, 'protocols', siteId, localDate(context.clock(), site.timeZone))
  return { version, protocols: body.protocols }
}

/** One protocol in force at a site; undefined when there is none of this name. */
export async function protocolAt(context: ServiceContext, db: Database, { siteId, id }: { siteId: string, id: string }): Promise<{ version: number, protocol: Protocol } | undefined> {
  const { version, protocols: known } = await protocolsAt(context, db, { siteId })
  const protocol = known.find(candidate => candidate.id === id)
  return protocol && { version, protocol }
}

/** Keeps with the study which protocol laid it out, in which version and with which runs: a later version changes nothing in it. */
export async function keepProtocol(context: ServiceContext, trx: Trx, study: { id: string, siteId: string, protocol: string | null }): Promise<void> {
  const found = study.protocol ? await protocolAt(context, trx, { siteId: study.siteId, id: study.protocol }) : undefined
  if (!found) return
  const { version, protocol } = found
  await trx.insertInto('studyProtocol').values({ studyId: study.id, protocolId: protocol.id, label: protocol.label, version, bodyJson: JSON.stringify(protocol) }).execute()
}

/** The protocol as it stood when the study was begun. A study from before such copies were kept is laid out by the list that the program ships. */
export async function keptProtocol(trx: Trx, studyId: string): Promise<Protocol | null> {
  const kept = await trx.selectFrom('studyProtocol').select('bodyJson').where('studyId', '=', studyId).executeTakeFirst()
  if (kept) return JSON.parse(kept.bodyJson) as Protocol
  const study = await trx.selectFrom('study').select('protocol').where('id', '=', studyId).executeTakeFirst()
  return protocols.find(protocol => protocol.id === study?.protocol) ?? null
}
