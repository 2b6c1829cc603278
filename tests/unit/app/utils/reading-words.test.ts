import { expect, it } from 'vitest'
import { reportDraftSchema } from '#shared/schemas/report'
import { cleanDraft } from '../../../../app/utils/reading/clean-draft'
import { newImpressionLine, signSentence } from '../../../../app/utils/reading/words'

const anna = { name: 'Dr Anna Sample', practiceName: 'Sample Practice', town: 'Sampletown' }
const ben = { name: 'Dr Ben Sample', practiceName: 'Other Practice', town: 'Othertown' }

it.each([
  { name: 'nobody', version: 1, recipients: [], words: /nobody is entered to receive it/ },
  { name: 'one, with clinic and town', version: 1, recipients: [anna], words: /final;.*sent to Dr Anna Sample \(Sample Practice, Sampletown\)\.$/ },
  { name: 'everyone', version: 2, recipients: [anna, ben], words: /version 2.*Sampletown\) and Dr Ben Sample \(Other Practice, Othertown\)\.$/ },
])('the sentence before signing names $name', ({ version, recipients, words }) => {
  expect(signSentence(version, recipients)).toMatch(words)
})

it('lines begun and left blank are not stored, what has words is', () => {
  const draft = reportDraftSchema.parse({ correlation: 'Fits.' })
  const line = { ...newImpressionLine('one'), words: 'RIGHT median neuropathy.' }
  const typed = { ...draft, impression: [newImpressionLine('blank'), line], limitations: [' ', ' none identified '], resolved: [{ key: 'a', reason: 'x' }, { key: 'b', reason: 'seen again' }], interpretCold: [{ runId: 'r', reason: '' }], promptContact: { who: ' ', at: '', means: '', readBack: true, note: '' } }
  const clean = cleanDraft(typed)
  expect(clean.impression).toEqual([line])
  expect(clean.limitations).toEqual(['none identified'])
  expect(clean.resolved.map(each => each.key)).toEqual(['b'])
  expect(clean.interpretCold).toEqual([])
  expect(clean.promptContact).toBeNull()
  expect(reportDraftSchema.safeParse(clean).success).toBe(true)
})

it('a new line of the impression has nothing chosen', () => {
  expect(newImpressionLine('x')).toEqual({ id: 'x', words: '', nerve: null, pattern: null, side: null, degree: null, abnormal: null })
})
