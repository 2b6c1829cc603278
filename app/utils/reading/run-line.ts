import type { RunAssessment } from '#shared/calculations/types'
import { techniqueOf } from '#shared/catalogue/nerves'
import { absenceLabels, type Run, type Study } from '#shared/schemas/study'

/**
 * How a run was recorded, in one line: temperature, distances, direction, quality. What makes evidence weak stands
 * beside the numbers, not on another page.
 *
 * @example runLine(study, run) // => '32.6 °C · 80, 215 mm · quality acceptable (artefact)'
 */
export function runLine(study: Study, assessment: RunAssessment): string {
  const run = study.runs.find(each => each.id === assessment.runId)
  if (!run) return ''
  return [
    assessment.cold.celsius === null ? '' : `${assessment.cold.celsius.toFixed(1)} °C`,
    distances(run),
    run.direction ?? '',
    run.elbowFlexionDegrees === undefined ? '' : `elbow at ${run.elbowFlexionDegrees}°`,
    run.shortSegments ? 'short segments' : '',
    ...series(run),
    quality(run),
  ].filter(Boolean).join(' · ')
}

function distances(run: Run): string {
  const typed = run.rows.map(row => row.values.distanceMm).filter(value => typeof value === 'number')
  return typed.length > 0 ? `${typed.join(', ')} mm` : ''
}

/** The single responses of a series as they were typed. */
function series(run: Run): string[] {
  const technique = techniqueOf(run.technique)
  const unit = technique?.kind === 'f-wave' ? 'ms' : 'mV'
  return run.rows.filter(row => row.series?.length).map((row) => {
    const where = run.rows.length > 1 ? ` ${technique?.sites.find(site => site.id === row.site)?.label ?? row.site}` : ''
    return `single responses${where}: ${row.series!.map(entry => typeof entry === 'number' ? String(entry) : absenceLabels[entry]).join(', ')} ${unit}`
  })
}

/** Good recordings need no remark. */
function quality(run: Run): string {
  if (!run.quality || (run.quality.grade === 'good' && !run.quality.note)) return ''
  const reasons = run.quality.reasons.length > 0 ? ` (${run.quality.reasons.join(', ')})` : ''
  return `quality ${run.quality.grade}${reasons}${run.quality.note ? `: ${run.quality.note}` : ''}`
}
