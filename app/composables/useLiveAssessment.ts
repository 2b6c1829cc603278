import { assessStudy } from '#shared/calculations/assess-study'
import type { Assessment, Policy, RunAssessment } from '#shared/calculations/types'
import type { ReferenceTable } from '#shared/schemas/reference-table'
import type { Study } from '#shared/schemas/study'
import { assessmentDifferences } from '~/utils/assessment-differences'

/** An unchanged part keeps its object, so that only what changed is drawn again. */
function keepSame<T>(before: T | undefined, after: T): T {
  return before !== undefined && JSON.stringify(before) === JSON.stringify(after) ? before : after
}

function keepRuns(before: RunAssessment[], after: RunAssessment[]): RunAssessment[] {
  const known = new Map(before.map(run => [run.runId, run]))
  return after.map(run => keepSame(known.get(run.runId), run))
}

/**
 * The assessment of what stands on the page, computed here by the same library as on the server while one types. Until
 * the adopted sets have arrived, and wherever it cannot be computed, the server's last assessment stands.
 *
 * @returns `differences`: results that the server sees differently for the same values; its answer stands and they are said
 * @example
 * const { assessment, differences } = useLiveAssessment(study, policy, () => view.value.assessment)
 */
export function useLiveAssessment(study: Ref<Study>, policy: Ref<Policy>, fromServer: () => Assessment) {
  const tables = shallowRef<ReferenceTable[] | null>(null)
  const problem = ref('')
  const differences = ref<string[]>([])
  const api = useApi()
  let last: Assessment | undefined

  async function loadTables() {
    try {
      const sets = await Promise.all(policy.value.adopted.map(set => api<ReferenceTable>(`/api/shelf/sets/${set.setId}`, { query: { version: set.version } })))
      tables.value = sets
      problem.value = ''
    }
    catch {
      problem.value = 'The reference sets could not be loaded: results appear after saving, not while you type.'
    }
  }
  onMounted(loadTables)
  watch(() => policy.value.adopted.map(set => `${set.setId}/${set.version}`).join(' '), loadTables)

  /** Null when it cannot be computed here: the library never throws, but an old page in an open tab may. */
  function compute(stored: Study): Assessment | null {
    try {
      return tables.value && assessStudy(stored, tables.value, policy.value)
    }
    catch {
      return null
    }
  }

  const assessment = computed<Assessment>(() => {
    const fresh = compute(study.value)
    if (!fresh) return fromServer()
    last = { ...fresh, runs: keepRuns(last?.runs ?? [], fresh.runs), remarks: keepSame(last?.remarks, fresh.remarks), comparisons: keepSame(last?.comparisons, fresh.comparisons) }
    return last
  })

  /** Compares with the server's assessment of the same stored study. */
  function compareWith(stored: Study, server: Assessment) {
    const mine = compute(stored)
    if (mine) differences.value = assessmentDifferences(mine, server)
    else if (tables.value) problem.value = 'Results could not be computed on this page: they appear after saving. Reload the page.'
  }

  return { assessment, live: computed(() => tables.value !== null), problem, differences, compareWith }
}
