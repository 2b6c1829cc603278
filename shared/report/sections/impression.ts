import { heading, note, paragraph, withSides, type Block, type ReportSection, type Words } from '../blocks'
import type { ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'
import type { ImpressionLine } from '../../schemas/report'

/** Side and degree beside the words only where the words do not say them: a side never appears twice or differently. */
function lineWords(line: ImpressionLine, words: ReportWords): Words[] {
  const said = line.words.toLowerCase()
  const side = line.side && !(line.side === 'both' ? /bilateral|both|\bright\b.*\bleft\b|\bleft\b.*\bright\b/ : new RegExp(`\\b${line.side}\\b`)).test(said) ? `${words.sides[line.side]}: ` : ''
  const degree = line.degree && !said.includes(line.degree.toLowerCase()) ? ` (${line.degree})` : ''
  return withSides(`${side}${capitalSides(line.words)}${degree}`)
}

/** "right" and "left" of the reader's words in capitals, as everywhere else in the report. */
const capitalSides = (text: string) => text.replace(/\b(right|left)\b/gi, side => side.toUpperCase())

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
