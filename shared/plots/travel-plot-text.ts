import type { Result, RunAssessment } from '../calculations/types'
import type { TravelPlotGeometry } from './travel-plot'
import { verdictWords } from './verdict-words'

/**
 * The travel plot in words: every site with its place and time, every segment with its velocity and what its limit says.
 *
 * @example travelPlotText('RIGHT ulnar motor', plot, assessment)
 * // => 'RIGHT ulnar motor: wrist at 0 mm, 2.9 ms; below elbow at 205 mm, 6.4 ms: 59 ± 3 m/s, within the lower limit 52 m/s.'
 */
export function travelPlotText(title: string, plot: TravelPlotGeometry, assessment: RunAssessment | undefined): string {
  const velocity = (rowId: string): Result | undefined => assessment?.results.find(result => result.rowId === rowId && result.quantity === 'velocityMps')
  const points = plot.points.map((point) => {
    const result = plot.segments.some(segment => segment.rowId === point.rowId) ? velocity(point.rowId) : undefined
    return `${point.label} at ${point.mm} mm, ${point.ms} ms${result ? `: ${verdictWords(result)}` : ''}`
  })
  const other = plot.otherSide ? ` The ${plot.otherSide} side is drawn dashed.` : ''
  const unplaced = plot.unplaced.length > 0 ? ` Not drawn: ${plot.unplaced.join('; ')}.` : ''
  return `${title}: ${points.join('; ')}.${unplaced}${other}`
}
