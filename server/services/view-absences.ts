import { absencesOf } from '#server/database/queries/absences'
import type { AbsencesView } from '#shared/schemas/absence'
import type { ServiceContext } from './context'
import { possibleCovers } from './keep-absence'
import { organisationDay } from './organisation-day'

/** When a person is away from today on, who covers, and who could. */
export async function viewAbsences(context: ServiceContext, userId: string): Promise<AbsencesView> {
  return { rows: await absencesOf(context.db, userId, await organisationDay(context)), covers: await possibleCovers(context, userId) }
}
