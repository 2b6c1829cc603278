import * as z from 'zod'
import type { Assessment } from '../calculations/types'
import { reportWords } from '../report/words'
import { idSchema } from '../schemas/common'
import type { ImpressionLine, PhraseSuggestion } from '../schemas/report'
import { allConditions, conditionSchema } from './conditions'
import { policyKind } from './kind'

const phraseSchema = z.object({
  id: idSchema,
  /** The words by language of the report; English always, others where the laboratory writes in them. `{side}` stands for the side. */
  texts: z.object({ en: z.string().trim().min(3, 'Write the phrase.').max(500) }).catchall(z.string().trim().max(500)),
  /** All of them together suggest the phrase; without any it stands in the list and is never suggested. */
  conditions: z.array(conditionSchema).max(6),
  /** What the line is about, for the wrong-side rule. */
  nerve: idSchema.nullable().default(null),
  abnormal: z.boolean().nullable().default(null),
})
export type Phrase = z.infer<typeof phraseSchema>

export const phrasesSchema = z.object({
  phrases: z.array(phraseSchema).max(200, 'Keep at most 200 phrases.'),
}).superRefine(({ phrases }, context) => {
  for (const [index, phrase] of phrases.entries()) {
    if (phrases.findIndex(other => other.id === phrase.id) !== index) context.addIssue({ code: 'custom', path: ['phrases', index, 'id'], message: 'Two phrases have the same id.' })
  }
})
export type Phrases = z.infer<typeof phrasesSchema>

/** The organisation's own words: the program comes with none, since an impression is a physician's and not the program's. */
export const phrases = policyKind({
  label: 'Phrases for the impression',
  about: 'The organisation\'s own sentences, by language, with what in a study suggests each of them. None is ever chosen beforehand.',
  scope: 'organisation',
  schema: phrasesSchema,
  initial: { phrases: [] },
})

type SideChoice = ImpressionLine['side']

/** Every phrase of the list for one study, those whose conditions are met first, once for each side they are met on. */
export function suggestPhrases(list: Phrases, version: number, assessment: Assessment, language: string): PhraseSuggestion[] {
  const suggestions = list.phrases.flatMap((phrase) => {
    const found = allConditions(phrase.conditions, assessment)
    const text = phrase.texts[language] || phrase.texts.en
    return sidesFor(text, found.met ? found.sides : []).map((side): PhraseSuggestion => ({
      id: `${phrase.id}@${version}`, key: `${phrase.id}/${side ?? ''}`, words: filled(text, side, language), side, nerve: phrase.nerve, abnormal: phrase.abnormal,
      pattern: phrase.nerve ? null : phrase.conditions.find(condition => condition.kind === 'pattern-met')?.pattern ?? null,
      fits: found.met, because: found.met ? found.because : '',
    }))
  })
  return suggestions.sort((a, b) => Number(b.fits) - Number(a.fits))
}

/** A phrase with a slot is offered for each side that fits, and for both together; one that fits nowhere keeps its slot open. */
function sidesFor(text: string, met: readonly ('right' | 'left')[]): SideChoice[] {
  if (!text.includes('{side}')) return [met.length === 1 ? met[0]! : met.length === 2 ? 'both' : null]
  return met.length === 2 ? ['both', ...met] : met.length === 1 ? [met[0]!] : [null]
}

function filled(text: string, side: SideChoice, language: string): string {
  return side ? text.replaceAll('{side}', reportWords(language).sides[side]) : text.replaceAll('{side}', '…')
}
