import { describe, expect, it } from 'vitest'
import { englishFindings } from '#shared/calculations/finding-words'
import { quantityInfos } from '#shared/calculations/quantity-info'
import { comparisons } from '#shared/catalogue/comparisons'
import { nerveLabels } from '#shared/catalogue/nerve-labels'
import { techniques } from '#shared/catalogue/nerves'
import { quantities } from '#shared/catalogue/quantities'
import { plainText, type Block, type Cell } from '#shared/report/blocks'
import { inLanguage } from '#shared/report/findings-in'
import { reportBlocks, type ReportSource } from '#shared/report/index'
import { languageNames, reportLanguages } from '#shared/report/languages'
import { reportWords } from '#shared/report/words'
import { disclaimerIn } from '#shared/report/sections/signature'
import { referralSchema } from '#shared/schemas/referral'
import { inReportLanguage, reportStudies } from '../../../fixtures/report-studies'

const de = reportWords('de')

/** Muscles have Latin names, short names and scales are the same everywhere. */
const sameInGerman = /^(?:[A-Z0-9+-]+|normal|BMI|R1|R2|(?:abductor|extensor|flexor|pronator|biceps|triceps|vastus|rectus|adductor|gluteus|tensor|tibialis|fibularis|brachioradialis|infraspinatus|supraspinatus|serratus|latissimus|iliopsoas|soleus|nasalis|deltoid|frontalis|masseter|orbicularis|quadriceps)\b.*)$/
const labels = [...new Set([
  ...techniques.flatMap(technique => [technique.label, technique.recording.label, ...technique.sites.flatMap(site => [site.label, ...site.segment ? [site.segment.label] : []]), ...(technique.ordinals ?? []).flatMap(ordinal => [ordinal.label, ...ordinal.choices])]),
  ...quantityInfos.map(info => info.label), ...Object.values(quantities).map(quantity => quantity.label), ...comparisons.map(comparison => comparison.label), ...Object.values(nerveLabels),
])].filter(label => !sameInGerman.test(label) && !['Minimum', 'minimum', 'maximum', 'onset', 'peak', 'palm', 'axilla'].includes(label))
const english = /\b(?:the|of|and|with|limits?|latency|velocity|amplitude|within|above|below|response|missing|not|no|wrist|elbow|ankle|recorded|motor|sensory|digit|right|left|fall|drop|difference|nothing|between|head|hand|foot)\b/

describe('German', () => {
  it('has a word for every label of the catalogue', () => {
    expect(labels.length).toBeGreaterThan(120)
    expect(labels.filter(label => de.say(label) === label), 'Add the German word to shared/report/words/de-terms.ts').toEqual([])
    expect(labels.filter(label => english.test(de.say(label).replace(/\bAmplitude\b/g, ''))).map(label => `${label} → ${de.say(label)}`)).toEqual([])
  })
  it.each([
    ['RIGHT median motor, abductor pollicis brevis', 'RECHTS N. medianus motorisch, abductor pollicis brevis'],
    ['LEFT ulnar sensory, digit 5', 'LINKS N. ulnaris sensibel, Digitus 5'],
    ['latency at wrist', 'Latenz, Handgelenk'],
    ['velocity, below elbow to wrist', 'Geschwindigkeit unterhalb Ellenbogen bis Handgelenk'],
    ['velocity across the elbow', 'Geschwindigkeit über den Ellenbogen'],
    ['velocity drop across the fibular head', 'Geschwindigkeitsabfall über den Fibulakopf'],
    ['amplitude fall, ankle to popliteal fossa', 'Amplitudenabfall Sprunggelenk bis Kniekehle'],
    ['no left ulnar motor run', 'keine Messung N. ulnaris motorisch LINKS'],
    ['no LEFT ulnar motor run', 'keine Messung N. ulnaris motorisch LINKS'],
    ['height missing', 'Körpergröße fehlt'],
    ['sex missing, height missing', 'Geschlecht fehlt, Körpergröße fehlt'],
    ['age 5 is outside 19 to 79', 'Alter 5 liegt außerhalb 19 bis 79'],
    ['RIGHT hand 28.4 °C, below 32 °C', 'RECHTS Hand 28.4 °C, unter 32 °C'],
    ['cold, not interpretable as slowing: LEFT hand 29.0 °C, below 32 °C', 'kalt, nicht als Verlangsamung verwertbar: LINKS Hand 29.0 °C, unter 32 °C'],
    ['distance 120 mm is not the set\'s 140 mm', 'die Distanz von 120 mm ist nicht die des Satzes (140 mm)'],
    ['the set\'s limit is for antidromic recording', 'der Grenzwert des Satzes gilt für Ableitung antidrom'],
    ['30 limits applied; about 0.9 would fall outside by chance in health. 6 do.', '30 Grenzwerte angewendet; etwa 0.9 lägen bei Gesunden zufällig außerhalb. Hier: 6.'],
    ['no response at wrist', 'keine Antwort, Handgelenk'],
    ['second lumbrical against interosseous', 'M. lumbricalis II gegen M. interosseus'],
    ['Supervision: in the room, Dr Sam Ple.', 'Aufsicht: im Raum, Dr Sam Ple.'],
    ['Room: Room at left 2. Equipment: Machine 2 (A14).', 'Raum: Room at left 2. Geräte: Machine 2 (A14).'],
    ['Tolerated well.', 'Vertragen: gut.'],
    ['The study was stopped: pain in the right arm.', 'Die Untersuchung wurde abgebrochen: pain in the right arm.'],
    ['not done: the left arm is in plaster', 'nicht durchgeführt: the left arm is in plaster'],
    ['RIGHT hand 29.0 °C, below 32 °C; interpreted all the same: right hand could not be warmed', 'RECHTS Hand 29.0 °C, unter 32 °C; trotzdem beurteilt: right hand could not be warmed'],
  ])('%s', (said, german) => {
    expect(de.say(said)).toBe(german)
  })
  it('above stays above, below stays below, RIGHT stays RIGHT', () => {
    expect([de.drafted.above, de.drafted.below, de.drafted.sides.right, de.drafted.sides.left]).toEqual(['über dem Grenzwert', 'unter dem Grenzwert', 'RECHTS', 'LINKS'])
  })
})

const cellText = (cell: Cell) => 'bar' in cell ? cell.text : [plainText(cell.words), cell.below].filter(Boolean).join(' ')
function textsOf(block: Block): string[] {
  switch (block.kind) {
    case 'heading': return [block.text]
    case 'paragraph':
    case 'note': return [plainText(block.words)]
    case 'keyValue': return block.items.map(item => item.label)
    case 'table': return [...block.columns.map(column => column.label), ...block.rows.flatMap(row => row.cells.map(cellText))]
    case 'figure': return [block.title, block.text]
    case 'figures': return block.figures.flatMap(figure => [figure.title, figure.text])
  }
}
/** Without what people typed and what the sets cite: that stays as it is. */
function drawnTexts(source: ReportSource): string[] {
  const { snapshot } = source
  const typed = [...snapshot.draft.impression.map(line => line.words), snapshot.draft.correlation, snapshot.draft.recommendation, ...snapshot.draft.limitations, snapshot.organisation.disclaimer, snapshot.referral.symptoms.replace(/\.$/, ''), snapshot.referral.onset, snapshot.referral.examination, ...snapshot.draft.interpretCold.map(item => item.reason), ...snapshot.assessment.setsUsed.flatMap(set => [set.title, set.citation.replace(/[\s,.;]+$/, ''), set.percentiles])].filter(Boolean)
  return reportBlocks(source).flatMap(part => part.blocks.flatMap(textsOf)).map(text => typed.reduce((rest, own) => rest.replaceAll(own, '').replaceAll(own.replace(/\b(right|left)\b/gi, side => side.toUpperCase()), ''), text))
}

describe.each(Object.keys(reportStudies))('in German: %s', (name) => {
  const source = inReportLanguage(reportStudies[name]!(), 'de')
  it('no English word is left beside what people typed', () => {
    const words = drawnTexts(source)
    expect(words.filter(text => english.test(text.replace(/\bAmplitude\b|(?:abductor|extensor|flexor)[a-z ]+|\bHand\b|\bRIGHT\b|\bLEFT\b/g, '')) || /\b(?:RIGHT|LEFT)\b/.test(text))).toEqual([])
  })
  it('has the same blocks, rows and numbers as in English', () => {
    const shape = (one: ReportSource) => reportBlocks(one).map(part => ({ id: part.id, blocks: part.blocks.map(block => block.kind === 'table' ? block.rows.map(row => row.cells.length) : block.kind) }))
    expect(shape(source)).toEqual(shape(inReportLanguage(reportStudies[name]!(), 'en')))
    const numbers = (text: string) => text.match(/\d+(?:\.\d+)?/g) ?? []
    const { snapshot } = reportStudies[name]!()
    for (const finding of source.snapshot.findings) {
      const before = snapshot.assessment.findings.find(other => other.key === finding.key)!
      expect(numbers(finding.text)).toEqual(numbers(before.text))
      expect(finding.text.includes('RECHTS')).toBe(before.text.includes('RIGHT'))
      expect(finding.text.includes('LINKS')).toBe(before.text.includes('LEFT'))
    }
  })
})

describe('languages', () => {
  it('every language has a name, the same sides apart from each other, and a default disclaimer', () => {
    for (const language of reportLanguages) {
      const words = reportWords(language)
      expect(languageNames[language]).not.toBe('')
      expect(words.language).toBe(language)
      expect(words.sides.right).not.toBe(words.sides.left)
      expect(words.disclaimerText.length).toBeGreaterThan(60)
    }
    expect(reportWords('xx').language).toBe('en')
  })
  it('English findings are those of the assessment itself, and fingerprints do not depend on the language', () => {
    const { snapshot } = reportStudies['carpal tunnel']!()
    expect(inLanguage('en', snapshot.study, snapshot.assessment)).toBe(snapshot.assessment)
    expect(inLanguage('de', snapshot.study, snapshot.assessment).findings.map(finding => [finding.key, finding.fingerprint])).toEqual(snapshot.assessment.findings.map(finding => [finding.key, finding.fingerprint]))
    expect(englishFindings.say('latency')).toBe('latency')
  })
  it('the disclaimer of an organisation is never lost', () => {
    expect(disclaimerIn(reportWords('en'), 'Our own words.')).toBe('Our own words.')
    expect(disclaimerIn(de, reportWords('en').disclaimerText)).toBe(de.disclaimerText)
    expect(disclaimerIn(de, 'Our own words.')).toBe(`${de.disclaimerText} Our own words.`)
    expect(disclaimerIn(de, 'Our own words.', 'Unsere eigenen Worte.')).toBe('Unsere eigenen Worte.')
    expect(disclaimerIn(reportWords('en'), 'Our own words.', 'Unsere eigenen Worte.')).toBe('Our own words.')
  })
  it('a referral takes a known language only', () => {
    const shape = referralSchema.shape.reportLanguage
    expect([shape.parse(undefined), shape.parse('de'), shape.safeParse('xx').success]).toEqual(['en', 'de', false])
  })
})
