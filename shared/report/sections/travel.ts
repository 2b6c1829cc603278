import { travelPlotGeometry } from '../../plots/travel-plot'
import { travelPlotText } from '../../plots/travel-plot-text'
import { heading, type FigureBlock, type ReportSection } from '../blocks'
import { resultWords } from '../limits'
import { runsOf, techniqueIn, type FrozenRun, type ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'

/** Plots are drawn for nerves stimulated at two sites or more: one site has no slope. */
const smallestSegments = 1

function figureOf({ run, technique, assessment }: FrozenRun, words: ReportWords): FigureBlock[] {
  const plot = travelPlotGeometry(run, assessment, techniqueIn(words, technique))
  if (!plot || plot.segments.length < smallestSegments || assessment.supersededBy) return []
  return [{ kind: 'figure', plot: 'travel', runId: run.id, title: words.say(assessment.title), text: travelPlotText(words.say(assessment.title), plot, assessment, { ...words.plot, result: result => resultWords(result, words) }) }]
}

/** Flagged nerves come first and are always drawn; the others as far as two lines of plots have room. */
const mostPlots = 6

/** Distance against time for each motor nerve: a slowed segment is seen as a bend. */
export const travel: ReportSection<ReportSource> = {
  id: 'travel',
  blocks: ({ snapshot }) => {
    const runs = runsOf(snapshot, ['motor'])
    const flagged = (frozen: FrozenRun) => frozen.assessment.results.some(result => result.flagged)
    const ordered = [...runs.filter(flagged), ...runs.filter(run => !flagged(run))]
    const words = reportWords(snapshot.language)
    const figures = ordered.flatMap(run => figureOf(run, words))
    const kept = figures.slice(0, Math.max(mostPlots, runs.filter(flagged).length))
    return kept.length > 0 ? [heading(2, words.travel, 'travel'), { kind: 'figures', figures: kept }] : []
  },
}
