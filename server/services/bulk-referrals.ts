import { mailableReferrer, lastReminded } from '#server/database/queries/letters'
import { isToIdentify } from '#server/database/queries/desk-referrals'
import { copiesOf, referralInputOf } from '#server/database/queries/referrals'
import type { Referral } from '#server/database/tables/referral'
import { DomainError } from '#shared/errors'
import { momentWords } from '#shared/moment-words'
import { nextStep } from '#shared/next-step'
import type { BulkInput, BulkItem } from '#shared/schemas/bulk'
import { missingForBooking } from '#shared/schemas/referral'
import { stateLabels } from '#shared/states'
import { mayAt, type ServiceContext } from './context'
import { acceptReferral, remind } from './move-referral'
import { organisationDay } from './organisation-day'
import { protocolAt } from './protocols'
import { possibleOwners, reassignReferral } from './reassign-referral'
import { patientReminder, remindPatient } from './tell-patient'

interface Line extends Referral { familyName: string, givenName: string, timeZone: string }
const no = (sentence: string) => ({ ok: false, sentence })
const yes = (sentence: string) => ({ ok: true, sentence })
type Outcome = ReturnType<typeof no>

/**
 * Says what an act would do to each of several referrals, or does it: every one in a transaction of its own, so that one
 * that cannot be done keeps nothing else back. Nothing of a referral outside the own sites is told.
 */
export async function actOnReferrals(context: ServiceContext, input: BulkInput): Promise<BulkItem[]> {
  const rows = await context.db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').innerJoin('site', 'site.id', 'referral.siteId')
    .selectAll('referral').select(['familyName', 'givenName', 'site.timeZone']).where('referral.id', 'in', input.ids).execute()
  const items: BulkItem[] = []
  for (const id of new Set(input.ids)) {
    const line = rows.find(row => row.id === id && mayAt(context.actor, 'referral.read', row.siteId))
    if (!line) items.push({ id, number: '', who: '', ...no('Not found, or at a site where you have no role.') })
    else items.push({ id, number: line.number, who: `${line.familyName}, ${line.givenName}`, ...await outcomeOf(context, line, input) })
  }
  return items
}

async function outcomeOf(context: ServiceContext, line: Line, input: BulkInput): Promise<Outcome> {
  const needed = input.act === 'remind' ? 'referral.write' : 'referral.triage'
  if (!mayAt(context.actor, needed, line.siteId)) return no('Your role at this site does not allow it.')
  const expected = await previewOf(context, line, input)
  if (!expected.ok || input.preview) return expected
  try {
    return await carryOut(context, line, input)
  }
  catch (error) {
    if (!(error instanceof DomainError)) throw error
    return no(error.options.fields?.map(field => field.message).join(' ') ?? error.body.message)
  }
}

async function previewOf(context: ServiceContext, line: Line, input: BulkInput): Promise<Outcome> {
  if (input.act === 'accept') return await previewAccept(context, line, input.protocol)
  if (input.act === 'reassign') return await previewReassign(context, line, input.ownerId)
  return await previewRemind(context, line)
}

async function previewAccept(context: ServiceContext, line: Line, protocol: string): Promise<Outcome> {
  if (line.state !== 'received') return no(`Is ${stateLabels[line.state]}: only received referrals can be accepted.`)
  const missing = missingForBooking(referralInputOf(line, await copiesOf(context.db, line.id)))
  if (await isToIdentify(context.db, line.id)) return no('Say first who the patient is: it came from the desk.')
  if (missing.length) return no(`${nextStep({ state: line.state, missing, studyState: null })} first.`)
  const found = await protocolAt(context, context.db, { siteId: line.siteId, id: protocol })
  return found ? yes(`Is accepted with the protocol ${found.protocol.label} and waits to be booked.`) : no('This site has no such protocol.')
}

async function previewReassign(context: ServiceContext, line: Line, ownerId: string | null): Promise<Outcome> {
  if (['answered', 'declined', 'cancelled', 'entered-in-error'].includes(line.state)) return no(`Is ${stateLabels[line.state]}: nobody has to look after it.`)
  if (ownerId === null) return line.ownerId === null ? no('Nobody looks after it now either.') : yes('Nobody in particular looks after it from now on.')
  const person = (await possibleOwners(context, line.siteId)).find(one => one.id === ownerId)
  if (!person) return no('This person does not work at the intake of this site.')
  return line.ownerId === ownerId ? no(`${person.name} looks after it already.`) : yes(`${person.name} looks after it from now on.`)
}

async function previewRemind(context: ServiceContext, line: Line): Promise<Outcome> {
  if (line.state === 'booked') {
    const { email, startsAt, because } = await patientReminder(context.db, line.id, context.clock())
    return email ? yes(`The patient gets a mail about ${momentWords(startsAt, line.timeZone)}.`) : no(because)
  }
  if (line.state !== 'returned') return no(`Is ${stateLabels[line.state]}: nobody outside is waited for.`)
  const to = await mailableReferrer(context.db, line.physicianId, await organisationDay(context))
  if (to.email === null) return no(`Telephone the practice: ${to.because}.`)
  const last = await lastReminded(context.db, line.id)
  return yes(`The referring physician gets the link once more${last ? `; the last mail is of ${momentWords(last, line.timeZone)}` : ''}.`)
}

async function carryOut(context: ServiceContext, line: Line, input: BulkInput): Promise<Outcome> {
  if (input.act === 'accept') {
    await acceptReferral(context, { id: line.id, protocol: input.protocol })
    return yes('Accepted; it waits to be booked.')
  }
  if (input.act === 'reassign') {
    await reassignReferral(context, { id: line.id, ownerId: input.ownerId })
    return yes(input.ownerId ? 'Given to the new person.' : 'Nobody in particular looks after it now.')
  }
  if (line.state === 'booked') {
    await remindPatient(context, { referralId: line.id })
    return yes('A reminder to the patient is in the outbox.')
  }
  return await remind(context, { id: line.id }) ? yes('A reminder to the referring physician is in the outbox.') : no('The physician cannot be mailed; there is a task to telephone.')
}
