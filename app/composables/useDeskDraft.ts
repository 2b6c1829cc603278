import { deskDraftSchema, type DeskDraftValues, type DeskDraftView } from '#shared/schemas/desk'

const AFTER_MS = 800

/**
 * A referral that is typed at the desk. It is stored on the server as it is typed, from the first letter on; of two
 * windows the second is told, and nothing typed is lost.
 *
 * @example
 * const draft = useDeskDraft(opened, { siteId: 'only-one' })
 */
export function useDeskDraft(opened: DeskDraftView | null, start: Partial<DeskDraftValues>) {
  const api = useApi()
  const values = ref<DeskDraftValues>(opened?.values ?? deskDraftSchema.parse(start))
  const id = ref(opened?.id ?? '')
  const revision = ref(opened?.revision ?? 0)
  const savedAt = ref(opened?.savedAt ?? '')
  const kept = ref(JSON.stringify(values.value))
  const theirs = ref<DeskDraftView | null>(null)
  const { problem, send } = useSending()
  const dirty = computed(() => JSON.stringify(values.value) !== kept.value)
  let running: Promise<void> | null = null
  let timer: ReturnType<typeof setTimeout> | undefined
  let closed = false

  async function store(): Promise<void> {
    const mine = JSON.stringify(values.value)
    const body = JSON.parse(mine) as DeskDraftValues
    const saved = await send(async (): Promise<Pick<DeskDraftView, 'id' | 'revision' | 'savedAt'>> => id.value
      ? { id: id.value, ...await api<{ revision: number, savedAt: string }>(`/api/desk/drafts/${id.value}`, { method: 'PUT', body: { revision: revision.value, values: body } }) }
      : await api<DeskDraftView>('/api/desk/drafts', { method: 'POST', body }))
    if (problem.value?.code === 'changed-meanwhile') theirs.value = { id: id.value, savedAt: '', ...(problem.value.details as { theirs: Pick<DeskDraftView, 'revision' | 'values'> }).theirs }
    if (!saved) return
    id.value = saved.id
    revision.value = saved.revision
    savedAt.value = saved.savedAt
    kept.value = mine
  }
  /** True when everything typed is stored. One save at a time; what is typed meanwhile is saved after it. */
  async function save(): Promise<boolean> {
    clearTimeout(timer)
    while (!closed && dirty.value && !theirs.value) {
      running ??= store().finally(() => running = null)
      await running
      if (problem.value) return false
    }
    return closed || !dirty.value
  }
  watch(values, () => {
    clearTimeout(timer)
    if (!closed) timer = setTimeout(save, AFTER_MS)
  }, { deep: true })

  async function keepMine() {
    if (theirs.value) revision.value = theirs.value.revision
    theirs.value = null
    await save()
  }
  function takeTheirs() {
    if (!theirs.value) return
    values.value = theirs.value.values
    kept.value = JSON.stringify(values.value)
    revision.value = theirs.value.revision
    theirs.value = null
    problem.value = null
  }
  /** Sent or discarded: nothing is stored any more. */
  function close() {
    closed = true
    clearTimeout(timer)
  }
  return { values, id, revision, savedAt, dirty, problem, theirs, save, keepMine, takeTheirs, close }
}
