import type { ServiceContext } from './context'
import { localDate } from './site-time'

/** Today as the organisation's calendar has it: the directory belongs to no site. */
export async function organisationDay(context: Pick<ServiceContext, 'db' | 'clock'>): Promise<string> {
  const organisation = await context.db.selectFrom('organisation').select('timeZone').executeTakeFirst()
  return localDate(context.clock(), organisation?.timeZone ?? 'UTC')
}
