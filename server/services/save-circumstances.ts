import type { Trx } from '#server/database/connection'
import { roomNames } from '#server/database/queries/site-calendar'
import { DomainError, type FieldError } from '#shared/errors'
import type { CircumstancesInput } from '#shared/schemas/bench-day'
import { mayAt, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { peopleWho } from './people-who'
import { recordAuditEvent } from './record-audit-event'

async function checkChoices(trx: Trx, siteId: string, day: string, input: CircumstancesInput): Promise<void> {
  const fields: FieldError[] = []
  if (input.room && !(await roomNames(trx, [siteId])).get(siteId)?.includes(input.room)) fields.push({ path: 'room', message: 'Choose a room of this site.' })
  const equipment = await trx.selectFrom('equipment').select('id').where('siteId', '=', siteId).where('id', 'in', input.equipmentIds).execute()
  if (equipment.length < new Set(input.equipmentIds).size) fields.push({ path: 'equipmentIds', message: 'Choose equipment of this site.' })
  if (input.supervisorId && !(await peopleWho(trx, 'report.sign', siteId, day)).some(person => person.id === input.supervisorId)) fields.push({ path: 'supervisorId', message: 'Choose a neurologist of this site as supervising physician.' })
  if (fields.length) throw new DomainError('not-valid', { fields })
}

/** The states in which what stood around the recording may still be completed: until it is read. */
const open = ['planned', 'recording', 'returned', 'handed-over', 'stopped']

/**
 * Room, equipment, supervision, and how the patient bore it. None of it changes a limit, so it may be completed after the
 * hand-over as well, until the study is read.
 * @throws DomainError 'changed-meanwhile', 'wrong-state', 'not-valid'
 */
export async function saveCircumstances(context: ServiceContext, { id, ...input }: CircumstancesInput & { id: string }): Promise<{ revision: number }> {
  return context.db.transaction().execute(async (trx) => {
    const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirst()
    if (!study) throw new DomainError('not-found')
    if (!open.includes(study.state) || !mayAt(context.actor, 'study.record', study.siteId)) throw new DomainError('wrong-state', { details: { state: study.state } })
    await checkChoices(trx, study.siteId, study.studyDate, input)
    const { equipmentIds, revision: seen, ...columns } = input
    const stood = await trx.selectFrom('studyCircumstances').select('revision').where('studyId', '=', id).executeTakeFirst()
    if ((stood?.revision ?? 0) !== seen) throw new DomainError('changed-meanwhile')
    const values = { ...columns, revision: seen + 1 }
    await trx.insertInto('studyCircumstances').values({ studyId: id, ...values }).onConflict(conflict => conflict.column('studyId').doUpdateSet(values)).execute()
    await trx.deleteFrom('studyEquipment').where('studyId', '=', id).execute()
    for (const equipmentId of new Set(equipmentIds)) await trx.insertInto('studyEquipment').values({ studyId: id, equipmentId }).execute()
    await recordAuditEvent(context, trx, { name: 'study.circumstances-saved', ...aboutStudy(study), data: { room: columns.room, supervision: columns.supervision, supervisorId: columns.supervisorId, tolerance: columns.tolerance, equipmentIds } })
    return { revision: seen + 1 }
  })
}
