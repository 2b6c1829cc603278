import { describe, expect, it } from 'vitest'
import { sideClaims, sidesInWords } from '#shared/report/side-claims'
import { isOpen, signChecks, type SignCheckInput } from '#shared/report/sign-checks'
import type { ImpressionLine } from '#shared/schemas/report'
import { above, assessmentOf, draftOf, runWith, studyOf, within } from '../../../fixtures/report-source'

const outside = (id: string, technique: string, side: 'right' | 'left') => runWith(id, technique, side, [{ site: 'wrist', values: { latencyMs: 5.2 }, verdicts: { latencyMs: above(4.4, 'ms') } }])
const inside = (id: string, technique: string, side: 'right' | 'left') => runWith(id, technique, side, [{ site: 'wrist', values: { latencyMs: 3.2 }, verdicts: { latencyMs: within('upper', 4.4, 'ms') } }])
/** RIGHT median (two flags) and RIGHT ulnar outside, LEFT within. */
const made = [outside('rm', 'median-motor-apb', 'right'), outside('rs', 'median-sensory-d2', 'right'), outside('ru', 'ulnar-motor-adm', 'right'), inside('lm', 'median-motor-apb', 'left'), inside('lu', 'ulnar-motor-adm', 'left')]
const study = studyOf(made.map(item => item.run))
const assessment = assessmentOf(made.map(item => item.assessment))

const line = (words: string, rest: Partial<ImpressionLine> = {}): ImpressionLine => ({ id: 'l1', words, nerve: null, pattern: null, side: null, degree: null, abnormal: null, ...rest })
function input(rest: Partial<SignCheckInput> = {}, ...lines: ImpressionLine[]): SignCheckInput {
  return {
    study, assessment, draft: { ...draftOf(), ...(lines.length > 0 ? { impression: lines } : {}) }, findings: [], clinicalQuestion: 'Median?', language: 'en',
    recipients: [{ name: 'Dr Sam Ple', reachable: true, because: '' }], namesakes: [], questions: [], ...rest,
  }
}
const open = (checks: SignCheckInput) => signChecks(checks).filter(isOpen).map(check => check.key)
const sideStops = (...lines: ImpressionLine[]) => signChecks(input({}, ...lines)).filter(check => isOpen(check) && check.key.startsWith('side'))

describe('sides in English words', () => {
  it.each([
    ['RIGHT median neuropathy', ['right']], ['Left-sided', ['left']], ['left-handed', ['left']], ['bilateral', ['right', 'left']], ['both hands', ['right', 'left']], ['on either side', ['right', 'left']],
    ['both the median and ulnar nerve on the right', ['right']], ['right and left', ['right', 'left']], ['median neuropathy', []], ['one site was left out', []], ['nothing is left to do', []], ['brightness, cleft', []],
  ])('%s', (words, sides) => {
    expect(sidesInWords(words, 'en')).toEqual(sides)
  })
})

describe('sides in German words', () => {
  it.each([
    ['Läsion des N. medianus RECHTS', ['right']], ['linksseitig', ['left']], ['der linke N. ulnaris', ['left']], ['re. betont', ['right']], ['li. mehr als re.', ['right', 'left']], ['beidseits', ['right', 'left']], ['bds. Karpaltunnelsyndrom', ['right', 'left']],
    ['an beiden Händen', ['right', 'left']], ['bilaterale Läsion', ['right', 'left']], ['beide Nerven RECHTS', ['right']], ['Rechtshänderin', []], ['rechtzeitig, Linkage, Recht', []], ['Polyneuropathie', []], ['RIGHT median neuropathy', ['right']],
  ])('%s', (words, sides) => {
    expect(sidesInWords(words, 'de')).toEqual(sides)
  })
  it('a language without a list of words: the fields alone speak', () => {
    expect(sidesInWords('à droite, right', 'fr')).toEqual([])
    expect(sideClaims(line('à droite', { side: 'left', abnormal: true }), 'fr').map(claim => [claim.side, claim.words])).toEqual([['left', 'à droite']])
  })
})

describe('the wrong-side rule in German', () => {
  const stops = (...lines: ImpressionLine[]) => signChecks(input({ language: 'de' }, ...lines)).filter(check => isOpen(check) && check.key.startsWith('side'))
  it.each<[string, Partial<ImpressionLine>]>([
    ['Läsion des N. medianus RECHTS am Handgelenk.', {}],
    ['Läsion des N. medianus rechts. Links kein Hinweis darauf.', {}],
    ['Karpaltunnelsyndrom rechts, aber links unauffällig.', {}],
    ['Läsion des N. medianus.', { side: 'right', nerve: 'median', abnormal: true }],
  ])('nothing to ask: %s', (words, fields) => {
    expect(stops(line(words, fields))).toEqual([])
  })
  it.each<[string, Partial<ImpressionLine>]>([
    ['Läsion des N. medianus LINKS am Handgelenk.', {}],
    ['Karpaltunnelsyndrom beidseits.', {}],
    ['Karpaltunnelsyndrom li.', {}],
    ['Läsion des N. tibialis rechts.', {}],
    ['N. medianus rechts unauffällig.', {}],
    ['Läsion des N. medianus rechts.', { side: 'left' }],
  ])('stops: %s', (words, fields) => {
    expect(stops(line(words, fields)).length).toBeGreaterThan(0)
  })
})

describe('the wrong-side rule', () => {
  it.each<[string, Partial<ImpressionLine>]>([
    ['RIGHT median neuropathy at the wrist.', {}],
    ['Right median neuropathy. No evidence of the same on the left.', {}],
    ['Median neuropathy.', { side: 'right', nerve: 'median', abnormal: true }],
    ['Median and ulnar neuropathy on the right, normal on the left.', {}],
    ['Carpal tunnel syndrome on the RIGHT.', {}],
    ['Generalised neuropathy.', {}],
    ['Normal LEFT median study.', { nerve: 'median', side: 'left', abnormal: false }],
  ])('lets pass: %s', (words, rest) => {
    expect(sideStops(line(words, rest))).toEqual([])
  })
  it.each<[string, Partial<ImpressionLine>]>([
    ['LEFT median neuropathy at the wrist.', {}],
    ['Median neuropathy.', { side: 'left', nerve: 'median', abnormal: true }],
    ['Median neuropathy.', { side: 'both', nerve: 'median', abnormal: true }],
    ['Bilateral median neuropathy.', {}],
    ['RIGHT fibular neuropathy.', {}],
    ['RIGHT median neuropathy; LEFT ulnar neuropathy.', {}],
    ['No median neuropathy on the RIGHT.', {}],
    ['Left carpal tunnel syndrome.', {}],
    ['Foot drop on the right.', {}],
    ['Median neuropathy of the LEFT wrist.', { side: 'right', nerve: 'median', abnormal: true }],
  ])('stops: %s', (words, rest) => {
    expect(sideStops(line(words, rest)).length).toBeGreaterThan(0)
  })
  it('finds each of a hundred seeded conflicts', () => {
    const openings = ['', 'Moderate ', 'Findings of ', 'Electrodiagnostic evidence of ', 'There is ']
    const forms = ['left median neuropathy', 'LEFT median neuropathy', 'median neuropathy on the left', 'median neuropathy, left', 'a left-sided median neuropathy', 'bilateral median neuropathy', 'median neuropathy in both hands', 'median neuropathy, left more than right', 'LEFT carpal tunnel syndrome', 'left ulnar neuropathy at the elbow']
    const endings = ['.', '. Normal on the right.']
    const seeded = openings.flatMap(opening => forms.flatMap(form => endings.map(ending => opening + form + ending)))
    expect(seeded).toHaveLength(100)
    expect(seeded.filter(words => sideStops(line(words)).length === 0)).toEqual([])
  })
  it('says which side has the flags', () => {
    expect(sideStops(line('LEFT median neuropathy.'))[0]?.sentence).toBe('"LEFT median neuropathy" speaks of the LEFT: no median row is flagged on the LEFT, but on the RIGHT there is.')
  })
  it('in a language without words reads the fields alone', () => {
    const french = line('Neuropathie du nerf médian à gauche.', { side: 'left', nerve: 'median', abnormal: true })
    expect(open(input({ language: 'fr' }, french)).some(key => key.startsWith('side/'))).toBe(true)
    expect(open(input({ language: 'fr' }, line('left', {}))).filter(key => key.startsWith('side'))).toEqual([])
  })
  it('exempts limitations and what was not done', () => {
    expect(open(input({ draft: { ...draftOf(), limitations: ['LEFT ulnar motor was not done'] } })).filter(key => key.startsWith('side'))).toEqual([])
  })
  it('a recommendation for the side without flags is questioned', () => {
    expect(open(input({ draft: { ...draftOf(), recommendation: 'Decompression on the left.' } })).map(key => key.split('/')[0])).toEqual(['side-text'])
  })
  it('is resolved with a reason, and asks again when the words change', () => {
    const wrong = line('LEFT median neuropathy.')
    const [stop] = sideStops(wrong)
    const resolved = [{ key: stop!.key, about: stop!.about, reason: 'Known from before' }]
    expect(open(input({ draft: { ...draftOf(), impression: [wrong], resolved } }))).toEqual([])
    expect(open(input({ draft: { ...draftOf(), impression: [line('LEFT median neuropathy, severe.')], resolved } })).length).toBe(1)
  })
  it('a claim splits at the turn of the sense', () => {
    expect(sideClaims(line('RIGHT median neuropathy but none on the LEFT'), 'en').map(claim => [claim.side, claim.abnormal])).toEqual([['right', true], ['left', false]])
  })
})

describe('the other points', () => {
  it('a complete report has none', () => {
    expect(open(input())).toEqual([])
  })
  it.each<[string, Partial<SignCheckInput>, string[]]>([
    ['no impression', { draft: { ...draftOf(), impression: [] } }, ['impression']],
    ['a blank impression', { draft: { ...draftOf(), impression: [line('  ')] } }, ['impression']],
    ['no correlation', { draft: { ...draftOf(), correlation: ' ' } }, ['correlation']],
    ['no limitation', { draft: { ...draftOf(), limitations: [] } }, ['limitations']],
    ['no question', { clinicalQuestion: '' }, ['question']],
    ['a technical report needs neither', { draft: { ...draftOf(), technicalOnly: true, impression: [], correlation: '' } }, []],
    ['a namesake', { namesakes: [{ recordNumber: 'P-2', name: 'Sample, A', birthDate: '1974-03-15' }] }, ['namesake/P-2']],
    ['nobody to send it to', { recipients: [] }, ['no-recipient']],
    ['an address that is not verified', { recipients: [{ name: 'Dr X', reachable: false, because: 'the address is not verified' }] }, ['recipient/Dr X']],
    ['an edited sentence on changed numbers', { findings: [{ key: 'run/rm', runIds: ['rm'], text: 'x', edited: true, needsReview: true, left: false }] }, ['review/run/rm']],
  ])('%s', (_name, rest, keys) => {
    expect(open(input(rest))).toEqual(keys)
  })
  it('what is missing cannot be answered with a reason', () => {
    const draft = { ...draftOf(), impression: [], resolved: [{ key: 'impression', reason: 'none needed' }] }
    expect(open(input({ draft }))).toEqual(['impression'])
  })
  it('one value outside is questioned, two are not', () => {
    const single = { ...assessment, flagged: [assessment.flagged[0]!] }
    expect(open(input({ assessment: single }))).toContain('isolated')
  })
  it('a cold run is interpreted with a reason or stays open', () => {
    const cold = runWith('cm', 'median-motor-apb', 'left', [{ site: 'wrist', values: { latencyMs: 5 }, verdicts: { latencyMs: { kind: 'cold', because: 'LEFT hand 28.0 °C', limits: [], wouldBe: 'above' } } }])
    const run = { ...cold.assessment, cold: { state: 'cold' as const, celsius: 28, thresholdC: 32, because: '' } }
    const withCold = { study: studyOf([...made.map(item => item.run), cold.run]), assessment: { ...assessment, runs: [...assessment.runs, run] } }
    expect(open(input(withCold))).toEqual(['cold/cm'])
    expect(open(input({ ...withCold, draft: { ...draftOf(), interpretCold: [{ runId: 'cm', reason: 'Could not be warmed' }] } }))).toEqual([])
  })
  it('no temperature, no limit and open questions of the program each ask once', () => {
    const bare = runWith('bm', 'median-motor-apb', 'left', [{ site: 'wrist', values: { latencyMs: 5 }, verdicts: { latencyMs: { kind: 'no-limit', because: 'no set adopted here' } } }])
    const run = { ...bare.assessment, cold: { state: 'unknown' as const, celsius: null, thresholdC: 32, because: '' } }
    const remark = { key: 'k1', code: 'c', strength: 'check' as const, sentence: 'Is 215 mm right?', source: '' }
    const more = { study: studyOf([...made.map(item => item.run), bare.run]), assessment: { ...assessment, runs: [...assessment.runs, run], remarks: [remark] } }
    expect(open(input(more))).toEqual(['temperature-missing', 'remark/k1', 'no-limit/no limit: no set adopted here'])
    const kept = studyOf([...made.map(item => item.run), bare.run], { keptChecks: [{ key: 'k1', reason: 'Measured twice' }] })
    const checks = signChecks(input({ ...more, study: kept }))
    expect(checks.find(check => check.key === 'kept/k1')).toMatchObject({ strength: 'ok', resolvedBecause: 'Measured twice' })
  })

  /** "Old injury" was said of the value that stood then. */
  it.each(['isolated', 'temperature-missing'])('an answer to %s does not outlive the value it was given for', (key) => {
    const at = (latencyMs: number): Partial<SignCheckInput> => {
      const one = runWith('rm', 'median-motor-apb', 'right', [{ site: 'wrist', values: { latencyMs }, verdicts: { latencyMs: above(4.4, 'ms') } }])
      const run = { ...one.assessment, cold: { state: 'unknown' as const, celsius: null, thresholdC: 32, because: '' } }
      return { study: studyOf([one.run]), assessment: { ...assessmentOf([run]), flagged: run.results.filter(result => result.flagged).map(result => result.key) } }
    }
    const { about } = signChecks(input(at(5.2))).find(check => check.key === key)!
    const draft = { ...draftOf(), resolved: [{ key, reason: 'Old injury.', about }] }
    expect(open(input({ ...at(5.2), draft }))).not.toContain(key)
    expect(open(input({ ...at(6.1), draft }))).toContain(key)
  })
})

describe('questions of the bench', () => {
  const asked = { id: 'q1', question: 'Add the ulnar?', runId: 'rm', answer: '', closedBy: null }
  it.each([
    { state: 'open' as const, rest: {}, key: 'question/q1', strength: 'check', stands: true },
    { state: 'answered' as const, rest: { answer: 'Yes.', closedBy: 'Dr Lind' }, key: 'answered/q1', strength: 'ok', stands: false },
    { state: 'withdrawn' as const, rest: {}, key: undefined, strength: undefined, stands: false },
  ])('$state', ({ state, rest, key, strength, stands }) => {
    const found = signChecks(input({ questions: [{ ...asked, state, ...rest }] })).find(item => item.key.endsWith('/q1'))
    expect([found?.key, found?.strength, found ? isOpen(found) : false]).toEqual([key, strength, stands])
  })
  it('an open one can be answered with a reason', () => {
    const checks = signChecks(input({ questions: [{ ...asked, state: 'open' }], draft: { ...draftOf(), resolved: [{ key: 'question/q1', reason: 'Answered by telephone.' }] } }))
    expect(checks.find(item => item.key === 'question/q1')?.resolvedBecause).toBe('Answered by telephone.')
  })
})
