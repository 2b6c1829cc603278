import type { ServiceContext } from '#server/services/context'
import { DemoClock, plusDays, workingTime } from './clock'
import { adoptSets, makeOrganisation, type Organisation } from './make-organisation'
import { makeDispatchWork } from './make-dispatch'
import type { Maker } from './make-study'
import { agreeOnPhrases } from './phrases'
import { makeFinished, makePresent, stages, type Stage } from './make-work'
import { Random } from './random'

/** How many of each piece of present work for every hundred studies. */
const present: Record<Stage, number> = { 'draft': 2, 'received': 3, 'returned': 1, 'accepted': 2, 'booked': 4, 'did-not-attend': 1, 'declined': 1, 'cancelled': 1, 'arrived': 1, 'recording': 1, 'stopped': 1, 'handed-over': 4, 'returned-to-bench': 1, 'drafted': 1, 'signed': 1 }

/**
 * Makes the demonstration: an invented organisation and about a year of its work, through the same services that people
 * use, with a clock that is set to each moment. The same seed makes the same work; passwords are random.
 */
export async function makeDemonstration(services: Omit<ServiceContext, 'clock'>, { studies, seed, today }: { studies: number, seed: number, today: Date }): Promise<Organisation> {
  const clock = new DemoClock(workingTime(plusDays(today, -380), 7))
  const context: ServiceContext = { ...services, clock: clock.read }
  const organisation = await makeOrganisation(context, clock)
  await adoptSets(context, organisation)
  await agreeOnPhrases(context, organisation)
  const maker: Maker = { context, clock, random: new Random(seed), organisation }

  const waiting = stages.flatMap(stage => Array.from({ length: Math.max(1, Math.round(present[stage] * studies / 100)) }, () => stage))
  const finished = Math.max(1, studies - waiting.length)
  // Every seventh is of the physician whose account is printed at the start: the desk has something to show.
  for (let index = 0; index < finished; index++) await makeFinished(maker, workingTime(plusDays(today, -360 + Math.floor(index * 354 / finished)), 8), { fromDesk: index % 7 === 3 })
  for (const stage of waiting) await makePresent(maker, stage, today)
  await makeDispatchWork(maker, today)
  return organisation
}
