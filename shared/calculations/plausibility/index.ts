import type { StudyContext } from '../study-context'
import type { ComparisonAssessment, Remark, RunAssessment } from '../types'

export function findRemarks(_context: StudyContext, _runs: readonly RunAssessment[], _comparisons: readonly ComparisonAssessment[]): Remark[] {
  return []
}
