import { describe, expect, it } from 'vitest'
import type { PatternResult } from '#shared/calculations/types'
import { conditionResult, type Condition } from '#shared/policies/conditions'
import { phrasesSchema, suggestPhrases, type Phrase } from '#shared/policies/phrases'
import { promptContact, promptFindings } from '#shared/policies/prompt-contact'
import { isOpen, signChecks, type SignCheckInput } from '#shared/report/sign-checks'
import type { ImpressionLine } from '#shared/schemas/report'
import { above, assessmentOf, draftOf, runWith, studyOf, within } from '../../../fixtures/report-source'

const outside = (id: string, technique: string, side: 'right' | 'left', latencyMs = 5.2) => runWith(id, technique, side, [{ site: 'wrist', values: { latencyMs }, verdicts: { latencyMs: above(4.4, 'ms') } }])
const inside = (id: string, technique: string, side: 'right' | 'left') => runWith(id, technique, side, [{ site: 'wrist', values: { latencyMs: 3.2 }, verdicts: { latencyMs: within('upper', 4.4, 'ms') } }])
const pattern = (side: 'right' | 'left', met: 'met' | 'not-met'): PatternResult => ({ id: 'bland-2000', version: 1, title: 'Grades', side, source: 'a paper', basis: 'read', outcome: { met, label: 'grade 3' }, criteria: [], runIds: [] })
const right = [outside('rm', 'median-motor-apb', 'right'), inside('lm', 'median-motor-apb', 'left')]
const both = [outside('rm', 'median-motor-apb', 'right'), outside('lm', 'median-motor-apb', 'left')]
const made = (runs: ReturnType<typeof outside>[], patterns: PatternResult[] = []) => ({ ...assessmentOf(runs.map(run => run.assessment)), patterns })
const line = (words: string): ImpressionLine => ({ id: 'l1', words, nerve: null, pattern: null, side: null, degree: null, abnormal: null })

describe('a condition', () => {
  it.each<[string, Condition, ReturnType<typeof made>, boolean, string[]]>([
    ['a flagged nerve', { kind: 'nerve-flagged', nerve: 'median' }, made(right), true, ['right']],
    ['a flagged nerve on both sides', { kind: 'nerve-flagged', nerve: 'median' }, made(both), true, ['right', 'left']],
    ['another nerve', { kind: 'nerve-flagged', nerve: 'ulnar' }, made(right), false, []],
    ['a pattern that is met', { kind: 'pattern-met', pattern: 'bland-2000' }, made(right, [pattern('right', 'met'), pattern('left', 'not-met')]), true, ['right']],
    ['a pattern that is not', { kind: 'pattern-met', pattern: 'bland-2000' }, made(right, [pattern('left', 'not-met')]), false, []],
    ['nothing outside', { kind: 'none-outside' }, made([inside('lm', 'median-motor-apb', 'left')]), true, []],
    ['nothing outside, while something is', { kind: 'none-outside' }, made(right), false, []],
    ['nothing outside, since nothing was judged', { kind: 'none-outside' }, made([]), false, []],
  ])('%s', (_, condition, assessment, met, sides) => {
    expect(conditionResult(condition, assessment)).toMatchObject({ met, sides })
  })
})

describe('phrases', () => {
  const phrase = (changes: Partial<Phrase> = {}): Phrase => ({ id: 'p1', texts: { en: 'Median neuropathy, {side}.' }, conditions: [{ kind: 'nerve-flagged', nerve: 'median' }], nerve: 'median', abnormal: true, ...changes })
  it('are offered for the side that fits, and remember their version', () => {
    expect(suggestPhrases({ phrases: [phrase()] }, 3, made(right), 'en')).toMatchObject([{ id: 'p1@3', words: 'Median neuropathy, RIGHT.', side: 'right', nerve: 'median', fits: true }])
  })
  it('on both sides are offered for both and for each', () => {
    expect(suggestPhrases({ phrases: [phrase()] }, 1, made(both), 'en').map(each => each.side)).toEqual(['both', 'right', 'left'])
  })
  it('that do not fit come last, with the side left open; one without conditions never fits', () => {
    const found = suggestPhrases({ phrases: [phrase({ id: 'ulnar', conditions: [{ kind: 'nerve-flagged', nerve: 'ulnar' }] }), phrase({ id: 'bare', conditions: [], texts: { en: 'As discussed.' } }), phrase()] }, 1, made(right), 'en')
    expect(found.map(each => [each.id, each.fits, each.words])).toEqual([['p1@1', true, 'Median neuropathy, RIGHT.'], ['ulnar@1', false, 'Median neuropathy, ….'], ['bare@1', false, 'As discussed.']])
  })
  it('are in the language of the report, English where there is no other text', () => {
    const texts = { en: 'Normal study.', xx: 'Ordinary.' }
    const list = { phrases: [phrase({ texts, conditions: [] })] }
    expect([suggestPhrases(list, 1, made(right), 'xx')[0]?.words, suggestPhrases(list, 1, made(right), 'yy')[0]?.words]).toEqual(['Ordinary.', 'Normal study.'])
  })
  it('with two conditions fit on the sides that both share', () => {
    const conditions: Condition[] = [{ kind: 'nerve-flagged', nerve: 'median' }, { kind: 'pattern-met', pattern: 'bland-2000' }]
    expect(suggestPhrases({ phrases: [phrase({ conditions })] }, 1, made(both, [pattern('left', 'met')]), 'en').filter(each => each.fits).map(each => each.side)).toEqual(['left'])
    expect(suggestPhrases({ phrases: [phrase({ conditions })] }, 1, made(right, [pattern('left', 'met')]), 'en').filter(each => each.fits)).toEqual([])
  })
  it('need a text in English and an id of their own', () => {
    expect(phrasesSchema.safeParse({ phrases: [phrase({ texts: { en: '' } })] }).success).toBe(false)
    expect(phrasesSchema.safeParse({ phrases: [phrase(), phrase()] }).success).toBe(false)
  })
})

describe('prompt contact', () => {
  const contact = { who: 'Dr Sam Ple', at: '9 March 2026, 14:05', means: 'telephone', readBack: true, note: '' }
  const input = (rest: Partial<SignCheckInput> = {}): SignCheckInput => ({
    study: studyOf(both.map(item => item.run)), assessment: made(both), draft: draftOf(), findings: [], clinicalQuestion: 'Median?', language: 'en',
    recipients: [{ name: 'Dr Sam Ple', reachable: true, because: '' }], namesakes: [], questions: [], promptFindings: [{ id: 'a', label: 'Severed nerve', because: 'the impression says "severed"' }], ...rest,
  })
  const prompts = (rest: Partial<SignCheckInput>) => signChecks(input(rest)).filter(check => check.key.startsWith('prompt'))
  it('is asked for by words of the impression and by what is met', () => {
    const found = (words: string, patterns: PatternResult[] = []) => promptFindings(promptContact.initial, made(right, patterns), { impression: [line(words)] }).map(each => each.id)
    expect(found('Median neuropathy.')).toEqual([])
    expect(found('In keeping with motor neurone disease.')).toEqual(['motor-neuron'])
    expect(found('Median neuropathy.', [{ ...pattern('right', 'met'), id: 'gbs-ho-1995' }])).toEqual(['acute-neuropathy-criteria'])
  })
  it('is answered by the record, or by a reason why nobody was told', () => {
    const [asked] = prompts({})
    expect(asked && isOpen(asked)).toBe(true)
    expect(prompts({ draft: { ...draftOf(), promptContact: contact } })).toMatchObject([{ strength: 'ok' }])
    const resolved = [{ key: asked!.key, reason: 'Known for years', about: asked!.about }]
    expect(prompts({ draft: { ...draftOf(), resolved } }).filter(isOpen)).toEqual([])
  })
  it.each(['who', 'at', 'means'] as const)('stops without %s', (field) => {
    const [found] = prompts({ draft: { ...draftOf(), promptContact: { ...contact, [field]: ' ' } } })
    expect(found).toMatchObject({ key: 'prompt-contact', strength: 'stop', answerable: false })
  })
})

describe('an answer', () => {
  it('counts for the numbers it was given to, and no longer', () => {
    const isolatedIn = (latencyMs: number, resolved: { key: string, reason: string, about?: string }[] = []) => {
      const runs = [outside('rm', 'median-motor-apb', 'right', latencyMs)]
      return signChecks({ study: studyOf(runs.map(item => item.run)), assessment: made(runs), draft: { ...draftOf(), resolved }, findings: [], clinicalQuestion: 'Median?', language: 'en', recipients: [{ name: 'Dr Sam Ple', reachable: true, because: '' }], namesakes: [], questions: [] }).find(check => check.key === 'isolated')
    }
    const asked = isolatedIn(5.2)!
    const answer = [{ key: 'isolated', reason: 'Fits the history', about: asked.about }]
    expect(isolatedIn(5.2, answer)?.resolvedBecause).toBe('Fits the history')
    expect(isolatedIn(6.1, answer)?.resolvedBecause).toBeUndefined()
    expect(isolatedIn(5.2, [{ key: 'isolated', reason: 'Fits the history' }])?.resolvedBecause).toBeUndefined()
  })
})
