import type { Result, RunAssessment } from '../calculations/types'
import type { TravelPlotGeometry } from './travel-plot'
import { verdictWords } from './verdict-words'

/** What a plot says in words, in one language. */
export interface PlotWords { point: (site: string, mm: number, ms: number) => string, result: (result: Result) => string, dashed: (side: string) => string, notDrawn: string }
const english: PlotWords = { point: (site, mm, ms) => `${site} at ${mm} mm, ${ms} ms`, result: verdictWords, dashed: side => `The ${side} side is drawn dashed.`, notDrawn: 'Not drawn' }

/**
 * The travel plot in words: every site with its place and time, every segment with its velocity and what its limit says.
 *
 * @example travelPlotText('RIGHT ulnar motor', plot, assessment)
 * // => 'RIGHT ulnar motor: wrist at 0 mm, 2.9 ms; below elbow at 205 mm, 6.4 ms: 59 ± 3 m/s, within the lower limit 52 m/s.'
 */
export function travelPlotText(title: string, plot: TravelPlotGeometry, assessment: RunAssessment | undefined, words: PlotWords = english): string {
  const velocity = (rowId: string): Result | undefined => assessment?.results.find(result => result.rowId === rowId && result.quantity === 'velocityMps')
  const points = plot.points.map((point) => {
    const result = plot.segments.some(segment => segment.rowId === point.rowId) ? velocity(point.rowId) : undefined
    return `${words.point(point.name, point.mm, point.ms)}${result ? `: ${words.result(result)}` : ''}`
  })
  const other = plot.otherSide ? ` ${words.dashed(plot.otherSide)}` : ''
  const unplaced = plot.unplaced.length > 0 ? ` ${words.notDrawn}: ${plot.unplaced.join('; ')}.` : ''
  return `${title}: ${points.join('; ')}.${unplaced}${other}`
}
