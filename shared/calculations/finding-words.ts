import type { Side } from '../schemas/common'
import { listed, sideWords } from './words'

/** The words that a drafted sentence is made of, in one language. Labels and reasons go through `say`. */
export interface FindingWords {
  sides: Record<Side, string>
  /** A label, title, absence or reason of the calculation in this language. */
  say: (text: string) => string
  listed: (items: readonly string[]) => string
  nothingRecorded: string
  nothingToJudge: string
  withinLimits: string
  above: string
  below: string
  withinTheLimit: string
  limit: string
  and: string
  nearer: string
  noLimit: string
  notJudged: string
  notComputable: string
}

export const englishFindings: FindingWords = {
  sides: sideWords,
  say: text => text,
  listed,
  nothingRecorded: 'nothing recorded',
  nothingToJudge: 'recorded, nothing to judge',
  withinLimits: 'within limits',
  above: 'above the limit',
  below: 'below the limit',
  withinTheLimit: 'within the limit',
  limit: 'limit',
  and: 'and',
  nearer: 'nearer to it than its measurement uncertainty',
  noLimit: 'no limit',
  notJudged: 'not judged',
  notComputable: 'not computable',
}
