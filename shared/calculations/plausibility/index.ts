import type { StudyContext } from '../study-context'
import type { ComparisonAssessment, Remark, RunAssessment } from '../types'
import { remarkOnAmplitudes } from './amplitudes'
import { remarkOnDistances } from './distances'
import { remarkOnOrder } from './order'
import { remarkList } from './remark'
import { remarkOnStudy } from './study-wide'
import { remarkOnTemperatures } from './temperatures'
import { remarkOnValues } from './values'

/**
 * What in the entries cannot be right (stop), is unlikely (check: keep it and say why), or is worth knowing (note), each
 * with its sentence and, where there is one, the next step. Order: runs as in the study, then temperatures, then what is
 * seen only across runs. The word for a nerve that does not carry on is not used: numbers alone do not say it.
 */
export function findRemarks(context: StudyContext, runs: readonly RunAssessment[], comparisons: readonly ComparisonAssessment[]): Remark[] {
  const list = remarkList(context.study)
  for (const [index, known] of context.runs.entries()) {
    const assessed = runs[index]
    if (!known.technique || !assessed || known.supersededBy !== undefined) continue
    const { rows } = known
    remarkOnValues(list, known, known.asides.length > 0 ? [...rows, ...known.asides] : rows)
    remarkOnOrder(list, known, rows)
    remarkOnDistances(list, known, rows, assessed)
    remarkOnAmplitudes(list, known, rows, assessed)
  }
  remarkOnTemperatures(list, context)
  remarkOnStudy(list, context, comparisons)
  return list.remarks
}
