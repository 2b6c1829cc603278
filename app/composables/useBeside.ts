import type { Assessment } from '#shared/calculations/types'
import type { Study } from '#shared/schemas/study'
import type { CellAddress } from '~/utils/grid-moves'
import type { Bench } from './useBenchStudy'

/** The study, what it comes to, and the cell in hand. */
export interface Beside { study: Study, assessment: Assessment, at: CellAddress | null }

/**
 * What stands beside the sheets follows when the keys rest, at the latest after a second, each part in a frame of its own.
 * The sheets themselves do not use it, and nothing is stored from it.
 *
 * @example
 * const beside = useBeside()
 * const run = computed(() => beside.value.study.runs.find(each => each.id === beside.value.at?.runId))
 */
export function useBeside(bench: Bench = useBench()) {
  const now = (): Beside => ({ study: bench.study.value, assessment: bench.assessment.value, at: bench.at.value })
  const shown = shallowRef(now())
  const follow = () => shown.value = now()
  watch([bench.study, bench.assessment, bench.at], () => bench.turns.atRest(follow, follow), { flush: 'sync' })
  return shown
}
