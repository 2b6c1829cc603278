import type { LimbTemperature } from '../../schemas/study'
import type { ReportSnapshot } from '../../schemas/report'
import { heading, markSigns, paragraph, withSides, type Block, type ReportSection, type Words } from '../blocks'
import { formatDay } from '../dates'
import { runsOf, type ReportSource } from '../source'
import { circumstanceSentences } from '../circumstances'
import { reportWords, type ReportWords } from '../words'

const labelled = (label: string, text: string): Block => paragraph([{ text: `${label}. `, strong: true }, ...withSides(text)], 'faint')

/** "RIGHT hand 32.6 °C (warmed)". */
function temperatureWords(reading: LimbTemperature, words: ReportWords): string {
  return `${words.sides[reading.side]} ${words.say(reading.segment)} ${reading.celsius.toFixed(1)} °C${reading.warmed ? ` (${words.warmth.warmed})` : ''}`
}

function directions(snapshot: ReportSnapshot, words: ReportWords): string {
  const said = runsOf(snapshot, ['sensory', 'mixed']).flatMap(({ run, technique }) => run.direction ?? technique.direction ?? [])
  const kinds = [...new Set(said)]
  return kinds.length > 0 ? words.how.directions(kinds.map(words.say)) : ''
}

function amplitudes(snapshot: ReportSnapshot, words: ReportWords): string {
  const said = runsOf(snapshot, ['sensory', 'mixed']).flatMap(({ run, technique }) => run.amplitudeDefinition ?? technique.amplitudeDefinition ?? [])
  const kinds = [...new Set(said)].map(kind => kind.replaceAll('-', ' '))
  return kinds.length > 0 ? words.how.amplitudes(kinds.map(words.say)) : ''
}

function techniqueText(snapshot: ReportSnapshot, words: ReportWords): string {
  const { policy } = snapshot
  return [
    words.how.surface,
    directions(snapshot, words),
    amplitudes(snapshot, words),
    words.how.uncertainty(policy.distanceUncertaintyMm, policy.latencyUncertaintyMs),
    snapshot.technologist ? words.how.recordedBy(snapshot.technologist) : '',
    ...circumstanceSentences(snapshot).map(words.say),
    snapshot.needleExamination ? words.say(snapshot.needleExamination) : words.how.needleNotDone,
    ...snapshot.assessment.runs.flatMap(run => run.notDone ? [`${words.say(run.title)}: ${words.say(run.notDone.replace(/\.$/, ''))}.`] : []),
    ...qualityNotes(snapshot, words),
    snapshot.handOverNote ? `${words.how.benchNote}: ${snapshot.handOverNote}` : '',
  ].filter(Boolean).join(' ')
}

function qualityNotes(snapshot: ReportSnapshot, words: ReportWords): string[] {
  return snapshot.assessment.runs.flatMap((assessed) => {
    const quality = snapshot.study.runs.find(run => run.id === assessed.runId)?.quality
    if (!quality || (quality.grade === 'good' && !quality.note)) return []
    return [`${words.say(assessed.title)}: ${words.how.quality} ${[words.say(quality.grade), ...quality.reasons, quality.note].filter(Boolean).join(', ')}.`]
  })
}

function temperatureText(snapshot: ReportSnapshot, words: ReportWords): string {
  const read = snapshot.study.temperatures.map(reading => temperatureWords(reading, words)).join(', ')
  return `${read || words.warmth.notRecorded}. ${words.warmth.floor(snapshot.policy.handMinimumC, snapshot.policy.footMinimumC)}`
}

/** How it was recorded, how warm the limbs were, by whom. */
export const method: ReportSection<ReportSource> = {
  id: 'method',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    return [
      heading(2, `${words.technique}, ${words.inSentence(words.temperatures)}, ${words.inSentence(words.limits)}`, 'method'),
      labelled(words.technique, techniqueText(snapshot, words)),
      labelled(words.temperatures, temperatureText(snapshot, words)),
    ]
  },
}

function setText(set: ReportSnapshot['assessment']['setsUsed'][number], snapshot: ReportSnapshot, words: ReportWords): string {
  const adopted = snapshot.policy.adopted.find(candidate => candidate.setId === set.setId && candidate.version === set.version)
  const compared = set.verifiedRows > 0 ? `, ${words.sets.compared(set.verifiedRows)}` : ''
  const memory = set.recalledRows > 0 ? `${words.sets.recalledRows(set.recalledRows)}${compared}` : ''
  const since = adopted?.adoptedOn ? words.sets.since(formatDay(adopted.adoptedOn, words.days)) : ''
  return [`${set.title}, ${words.sets.version(set.version)} (${set.citation.replace(/[\s,.;]+$/, '')})`, words.sets.declared(set.percentiles), memory, since].filter(Boolean).join(', ') + '.'
}

/** Which limits, from where, how many were applied and how many fall outside by chance. */
export const limits: ReportSection<ReportSource> = {
  id: 'limits',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const { setsUsed, chance } = snapshot.assessment
    const sets = setsUsed.map(set => setText(set, snapshot, words)).join(' ') || words.sets.none
    const legend: Words[] = withSides(words.legend(markSigns.above, markSigns.below), { faint: true })
    return [labelled(words.limits, [sets, chance.limitsApplied > 0 ? words.say(chance.sentence) : ''].filter(Boolean).join(' ')), paragraph(legend, 'faint')]
  },
}
