import { figureWords, indicatorIds, indicators } from '#shared/indicators'
import type { OverviewView } from '#shared/schemas/overview'

/** Every figure as a line of its own, with its definition. */
export function overviewCsv({ months, sites, figures }: OverviewView): { head: string[], rows: string[][] } {
  const number = (value: number | null) => value === null ? '' : String(Math.round(value * 100) / 100)
  const rows = indicatorIds.flatMap(id => sites.flatMap(site => months.map((month, index) => {
    const figure = figures[id][site.id]![index]!
    const { label, kind, definition } = indicators[id]
    return [label, site.name, month, String(figure.cases), kind === 'share' ? String(figure.counted) : '', number(figure.medianHours), number(figure.ninetiethHours), number(figure.perDay), figureWords(kind, figure), definition]
  })))
  return { head: ['Indicator', 'Site', 'Month', 'Cases', 'Counted', 'Median, hours', '90th centile, hours', 'Per day', 'In words', 'Definition'], rows }
}
