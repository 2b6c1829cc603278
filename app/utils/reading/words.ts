import type { Assessment } from '#shared/calculations/types'
import type { DeliveryRow } from '#shared/schemas/delivery'
import type { ImpressionLine } from '#shared/schemas/report'

/** Sides are always said in capitals. */
export const sideLabels = { right: 'RIGHT', left: 'LEFT', both: 'BOTH SIDES', midline: 'MIDLINE' } as const

/** How a report reaches a recipient. */
export const methodWords: Record<DeliveryRow['method'], string> = {
  'encrypted-pdf': 'e-mail with the encrypted PDF',
  'collection-link': 'e-mail with a collection link',
  'letter': 'letter, sent by hand',
  'telephone': 'telephone, by hand',
}

export interface Recipient { name: string, practiceName: string, town: string, /** where others of that name work */ namesakes?: readonly string[] }

/**
 * One sentence: what signing does, and to whom the report goes.
 *
 * @example signSentence(1, [{ name: 'Dr A. Sample', practiceName: 'Sample Practice', town: 'Sampletown' }])
 */
export function signSentence(version: number, recipients: readonly Recipient[]): string {
  const made = version === 1 ? 'Signing makes this report final' : `Signing makes version ${version} of this report`
  if (recipients.length === 0) return `${made}; nobody is entered to receive it, so nothing is sent.`
  const to = recipients.map(each => `${each.name} (${each.practiceName}, ${each.town})`).join(' and ')
  return `${made}; after 60 seconds, in which it can still be withdrawn in Dispatch, it is sent to ${to}.`
}

export function newImpressionLine(id: string): ImpressionLine {
  return { id, words: '', nerve: null, pattern: null, side: null, degree: null, abnormal: null }
}

/** By which sets and for whom a study was judged, in one line. */
export function judgedBy({ setsUsed, person }: Pick<Assessment, 'setsUsed' | 'person'>): string {
  const sets = setsUsed.map(set => `${set.title}, version ${set.version}`).join('; ')
  return sets ? `limits: ${sets} · for ${person.words}` : `no limits applied · ${person.words}`
}
