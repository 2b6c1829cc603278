import type { LimbTemperature } from '../../schemas/study'
import type { ReportSnapshot } from '../../schemas/report'
import { heading, markSigns, paragraph, withSides, type Block, type ReportSection, type Words } from '../blocks'
import { formatDay } from '../dates'
import { runsOf, type ReportSource } from '../source'
import { circumstanceSentences } from '../circumstances'
import { reportWords } from '../words'

const labelled = (label: string, text: string): Block => paragraph([{ text: `${label}. `, strong: true }, ...withSides(text)], 'faint')

/** "RIGHT hand 32.6 °C (warmed)". */
function temperatureWords(reading: LimbTemperature, language: string): string {
  const side = reportWords(language).sides[reading.side]
  return `${side} ${reading.segment} ${reading.celsius.toFixed(1)} °C${reading.warmed ? ' (warmed)' : ''}`
}

function directions(snapshot: ReportSnapshot): string {
  const said = runsOf(snapshot, ['sensory', 'mixed']).flatMap(({ run, technique }) => run.direction ?? technique.direction ?? [])
  const kinds = [...new Set(said)]
  return kinds.length > 0 ? `Sensory and mixed responses ${kinds.join(' and ')}.` : ''
}

function amplitudes(snapshot: ReportSnapshot): string {
  const said = runsOf(snapshot, ['sensory', 'mixed']).flatMap(({ run, technique }) => run.amplitudeDefinition ?? technique.amplitudeDefinition ?? [])
  const kinds = [...new Set(said)].map(kind => kind.replaceAll('-', ' '))
  return kinds.length > 0 ? `Sensory amplitude ${kinds.join(' and ')}.` : ''
}

function techniqueText(snapshot: ReportSnapshot): string {
  const { policy } = snapshot
  return [
    'Surface electrodes.',
    directions(snapshot),
    amplitudes(snapshot),
    `Velocity ± its expanded measurement uncertainty, k = 2 (distance ${policy.distanceUncertaintyMm} mm, latency ${policy.latencyUncertaintyMs} ms).`,
    snapshot.technologist ? `Recorded by ${snapshot.technologist}.` : '',
    ...circumstanceSentences(snapshot),
    snapshot.needleExamination || 'Needle examination not done.',
    ...snapshot.assessment.runs.flatMap(run => run.notDone ? [`${run.title}: ${run.notDone.replace(/\.$/, '')}.`] : []),
    ...qualityNotes(snapshot),
    snapshot.handOverNote ? `Note at the bench: ${snapshot.handOverNote}` : '',
  ].filter(Boolean).join(' ')
}

function qualityNotes(snapshot: ReportSnapshot): string[] {
  return snapshot.assessment.runs.flatMap((assessed) => {
    const quality = snapshot.study.runs.find(run => run.id === assessed.runId)?.quality
    if (!quality || (quality.grade === 'good' && !quality.note)) return []
    return [`${assessed.title}: quality ${[quality.grade, ...quality.reasons, quality.note].filter(Boolean).join(', ')}.`]
  })
}

function temperatureText(snapshot: ReportSnapshot): string {
  const read = snapshot.study.temperatures.map(reading => temperatureWords(reading, snapshot.language)).join(', ')
  const floor = `The limb is called cold below ${snapshot.policy.handMinimumC} °C at the hand and ${snapshot.policy.footMinimumC} °C at the foot, or below the limit of the set if that is higher.`
  return `${read || 'Not recorded; every limb without a temperature counts as cold'}. ${floor}`
}

/** How it was recorded, how warm the limbs were, by whom. */
export const method: ReportSection<ReportSource> = {
  id: 'method',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    return [
      heading(2, `${words.technique}, ${words.temperatures.toLowerCase()}, ${words.limits.toLowerCase()}`, 'method'),
      labelled(words.technique, techniqueText(snapshot)),
      labelled(words.temperatures, temperatureText(snapshot)),
    ]
  },
}

const counted = (count: number, word: string) => `${count} ${word}${count === 1 ? '' : 's'}`

function setText(set: ReportSnapshot['assessment']['setsUsed'][number], snapshot: ReportSnapshot, recalled: string): string {
  const adopted = snapshot.policy.adopted.find(candidate => candidate.setId === set.setId && candidate.version === set.version)
  const compared = set.verifiedRows > 0 ? `, ${set.verifiedRows} compared with the publication` : ''
  const memory = set.recalledRows > 0 ? `${counted(set.recalledRows, 'row')} ${recalled}${compared}` : ''
  const since = adopted?.adoptedOn ? `in use here since ${formatDay(adopted.adoptedOn)}` : ''
  return [`${set.title}, version ${set.version} (${set.citation.replace(/[\s,.;]+$/, '')})`, set.percentiles, memory, since].filter(Boolean).join(', ') + '.'
}

/** Which limits, from where, how many were applied and how many fall outside by chance. */
export const limits: ReportSection<ReportSource> = {
  id: 'limits',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const { setsUsed, chance } = snapshot.assessment
    const sets = setsUsed.map(set => setText(set, snapshot, words.recalled)).join(' ') || 'No limits were applied: no set adopted here covers these values.'
    const legend: Words[] = withSides(words.legend(markSigns.above, markSigns.below), { faint: true })
    return [labelled(words.limits, [sets, chance.limitsApplied > 0 ? chance.sentence : ''].filter(Boolean).join(' ')), paragraph(legend, 'faint')]
  },
}
