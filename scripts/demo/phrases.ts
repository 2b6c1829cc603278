import { actingAs, type ServiceContext } from '#server/services/context'
import { approvePolicy, proposePolicy } from '#server/services/policies'
import { localDate } from '#server/services/site-time'
import type { Phrases } from '#shared/policies/phrases'
import { actorFor, type Organisation } from './make-organisation'
import { organisation as invented } from './people'

/** Phrases that the invented organisation agreed on; wording of our own. */
const phrases: Phrases = {
  phrases: [
    { id: 'none', texts: { en: 'No abnormality in the nerves that were studied.' }, conditions: [{ kind: 'none-outside' }], nerve: null, abnormal: false },
    { id: 'median-wrist', texts: { en: 'Median neuropathy at the wrist, {side}, as in carpal tunnel syndrome.' }, conditions: [{ kind: 'pattern-met', pattern: 'bland-2000' }], nerve: 'median', abnormal: true },
    { id: 'ulnar-elbow', texts: { en: 'Ulnar neuropathy at the elbow, {side}.' }, conditions: [{ kind: 'nerve-flagged', nerve: 'ulnar' }], nerve: 'ulnar', abnormal: true },
    { id: 'fibular-head', texts: { en: 'Fibular (peroneal) neuropathy at the fibular head, {side}.' }, conditions: [{ kind: 'nerve-flagged', nerve: 'fibular' }], nerve: 'fibular', abnormal: true },
    { id: 'length-dependent', texts: { en: 'Polyneuropathy that depends on the length of the nerves.' }, conditions: [{ kind: 'nerve-flagged', nerve: 'sural' }, { kind: 'nerve-flagged', nerve: 'fibular' }], nerve: null, abnormal: true },
    { id: 'unchanged', texts: { en: 'No change against the earlier study beyond what repeated measurement makes.' }, conditions: [], nerve: null, abnormal: null },
  ],
}

/** Proposed by a reader, approved by the medical director. */
export async function agreeOnPhrases(context: ServiceContext, { people }: Organisation): Promise<void> {
  const by = async (key: string) => actingAs(context, await actorFor(context, people.find(person => person.key === key)!.id))
  const { id } = await proposePolicy(await by('neurologist'), { name: 'phrases', siteId: null, body: phrases, note: 'What the readers agreed to write alike.', effectiveOn: localDate(context.clock(), invented.timeZone) })
  await approvePolicy(await by('medical-director'), { id })
}
