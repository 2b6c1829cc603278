import { escapeXml, plotFont, px, type PlotColours } from './tokens'
import type { TravelPlotGeometry } from './travel-plot'

const line = (x1: number, y1: number, x2: number, y2: number, stroke: string, width = 0.7) =>
  `<line x1="${px(x1)}" y1="${px(y1)}" x2="${px(x2)}" y2="${px(y2)}" stroke="${stroke}" stroke-width="${width}"/>`

function text(x: number, y: number, words: string, fill: string, { size = 11, anchor = 'start', bold = false } = {}): string {
  return `<text x="${px(x)}" y="${px(y)}" font-family="${plotFont}" font-size="${size}" fill="${fill}" text-anchor="${anchor}"${bold ? ' font-weight="600"' : ''}>${escapeXml(words)}</text>`
}

function axes({ area, timeTicks, distanceTicks, origin }: TravelPlotGeometry, colours: PlotColours, from: string): string[] {
  return [
    text(2, 12, `${from} ${origin}`, colours.faint),
    text(area.right, area.bottom - 5, 'ms', colours.faint, { anchor: 'end' }),
    ...timeTicks.flatMap(tick => [line(tick.at, area.bottom, tick.at, area.bottom + 4, colours.faint, 1), text(tick.at, area.bottom + 18, String(tick.value), colours.faint, { anchor: 'middle' })]),
    ...distanceTicks.flatMap(tick => [line(area.left, tick.at, area.right, tick.at, colours.rule), tick.isCovered ? '' : text(area.left - 5, tick.at + 4, String(tick.value), colours.faint, { anchor: 'end' })]),
  ]
}

/**
 * The travel plot as SVG text with given colours, for paper.
 *
 * @example travelPlotSvg(travelPlotGeometry(run, assessment, technique), printColours)
 */
export function travelPlotSvg(plot: TravelPlotGeometry, colours: PlotColours, from = 'mm from'): string {
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${plot.width}" height="${plot.height}" viewBox="0 0 ${plot.width} ${plot.height}">`,
    ...axes(plot, colours, from),
    ...plot.wedges.map(wedge => `<path d="${wedge.path}" fill="${colours.sheath}" stroke="${colours.rule}" stroke-width="0.7"/>`),
    plot.otherPath ? `<path d="${plot.otherPath}" fill="none" stroke="${colours.faint}" stroke-width="1.2" stroke-dasharray="3 3"/>` : '',
    ...plot.segments.map(({ from, to, tone }) => line(from.x, from.y, to.x, to.y, colours[tone], 2)),
    ...plot.points.flatMap(point => [
      `<circle cx="${px(point.x)}" cy="${px(point.y)}" r="3.6" fill="${colours.sheet}" stroke="${colours.ink}" stroke-width="2"/>`,
      point.isNamed ? text(point.labelX, point.labelY, point.label, colours.ink, { size: 12, anchor: point.anchor }) : '',
    ]),
    ...plot.segments.filter(segment => segment.words).map(({ label, words, tone }) => text(label.x, label.y, words, tone === 'ink' ? colours.fibre : colours[tone], { size: 12, anchor: label.anchor, bold: true })),
    '</svg>',
  ].join('')
}
