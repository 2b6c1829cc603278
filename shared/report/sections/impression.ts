import { heading, note, paragraph, withSides, type Block, type ReportSection, type Words } from '../blocks'
import { sidesInWords } from '../side-claims'
import type { ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'
import type { ImpressionLine } from '../../schemas/report'

/** Side and degree beside the words only where the words do not say them: a side never appears twice or differently. */
function lineWords(line: ImpressionLine, words: ReportWords): Words[] {
  const said = line.words.toLowerCase()
  const named = sidesInWords(line.words, words.language)
  const isSaid = line.side === 'both' ? named.length === 2 : line.side !== null && named.includes(line.side)
  const side = line.side && !isSaid ? `${words.sides[line.side]}: ` : ''
  const degree = line.degree && !said.includes(line.degree.toLowerCase()) ? ` (${line.degree})` : ''
  return withSides(`${side}${capitalSides(line.words)}${degree}`)
}

/** "right" and "left", "rechts" and "links" of the reader's words in capitals, as everywhere else in the report. */
const capitalSides = (text: string) => text.replace(/\b(right|left|rechts|links)\b/gi, side => side.toUpperCase())

/** The reader's conclusion, two to five lines, before any number. A technical report says that it has none. */
export const impression: ReportSection<ReportSource> = {
  id: 'impression',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    if (snapshot.draft.technicalOnly) return [note('warning', words.technicalOnly)]
    const lines = snapshot.draft.impression.map((line): Block => paragraph(lineWords(line, words), 'lead'))
    return lines.length > 0 ? [heading(2, words.impression, 'impression'), ...lines] : []
  },
}
