import type { ReportSnapshot } from '#shared/schemas/report'
import type { ReportWords } from '#shared/report/words'
import type { Spacing } from './style'

/** What every block is drawn with: the frozen report, the words of its language, how close things stand. */
export interface Drawing { snapshot: ReportSnapshot, words: ReportWords, spacing: Spacing }
