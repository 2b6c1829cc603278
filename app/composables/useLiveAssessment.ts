import type { Assessment, Policy } from '#shared/calculations/types'
import type { ReferenceTable } from '#shared/schemas/reference-table'
import type { Study } from '#shared/schemas/study'
import { patchOf, withPatch } from '~/utils/runs-patch'
import type { Turns } from '~/utils/turns'
import type { FromAssessor, ToAssessor } from '~/workers/assess.worker'

/**
 * The assessment of what stands on the page, computed beside it by the same library as on the server while one types: in
 * a worker, so that no key waits for it. Until the adopted sets have arrived, and wherever it cannot be computed, the
 * server's last assessment stands.
 *
 * @returns `differences`: results that the server sees differently for the same values; its answer stands and they are said
 * @example
 * const { assessment, differences } = useLiveAssessment(study, policy, () => view.value.assessment, turns)
 */
export function useLiveAssessment(study: Ref<Study>, policy: Ref<Policy>, fromServer: () => Assessment, turns: Turns) {
  const tables = shallowRef<ReferenceTable[] | null>(null)
  const computedHere = shallowRef<Assessment>()
  const problem = ref('')
  const differences = ref<string[]>([])
  const api = useApi()
  let worker: Worker | undefined
  /** One study under way at a time; of those typed meanwhile only the last is looked at. */
  let isBusy = false
  let isWaiting = false
  /** The study as the worker knows it. */
  let sent: Study | undefined

  const post = (message: ToAssessor) => worker?.postMessage(message)

  async function loadTables() {
    try {
      const sets = await Promise.all(policy.value.adopted.map(set => api<ReferenceTable>(`/api/shelf/sets/${set.setId}`, { query: { version: set.version } })))
      tables.value = sets
      problem.value = ''
      post({ kind: 'tables', tables: sets })
      ask()
    }
    catch {
      problem.value = 'The reference sets could not be loaded: results appear after saving, not while you type.'
    }
  }

  function ask() {
    isWaiting = isBusy
    if (isBusy || !worker || !tables.value) return
    isBusy = true
    const now = toRaw(study.value)
    post({ kind: 'assess', patch: patchOf(sent, now), policy: toRaw(policy.value) })
    sent = now
  }

  function onAnswer({ data }: MessageEvent<FromAssessor>) {
    if (data.kind === 'compared') return void (differences.value = data.differences)
    isBusy = false
    if (data.kind === 'assessed') computedHere.value = withPatch(computedHere.value, data.patch)
    else onFailure()
    if (isWaiting) ask()
  }
  function onFailure() {
    computedHere.value = undefined
    problem.value = 'Results could not be computed on this page: they appear after saving. Reload the page.'
  }

  onMounted(() => {
    worker = new Worker(new URL('../workers/assess.worker.ts', import.meta.url), { type: 'module' })
    worker.onmessage = onAnswer
    worker.onerror = onFailure
    void loadTables()
  })
  onBeforeUnmount(() => worker?.terminate())
  watch(() => policy.value.adopted.map(set => `${set.setId}/${set.version}`).join(' '), loadTables)
  watch([study, policy], () => turns.soon(ask, ask), { flush: 'sync' })

  /** Compares with the server's assessment of the same stored study. */
  function compareWith(stored: Study, server: Assessment) {
    if (tables.value) post({ kind: 'compare', study: stored, policy: toRaw(policy.value), server })
  }

  return { assessment: computed(() => computedHere.value ?? fromServer()), live: computed(() => tables.value !== null), problem, differences, compareWith }
}
