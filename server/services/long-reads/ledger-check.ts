import type { Database } from '#server/database/connection'
import { chainMacs, type ChainKeys } from '../keys'
import { checkChains } from '../check-chains'
import { verifyReports } from '../verify-reports'

/** Both chains from their first link, every signed version and every stored PDF; names what was altered. */
export async function ledgerCheck(db: Database, { chainKeys }: { chainKeys: ChainKeys }) {
  const chains = await checkChains({ db, keys: chainMacs(chainKeys) })
  return { ...chains, reports: await verifyReports(db) }
}
