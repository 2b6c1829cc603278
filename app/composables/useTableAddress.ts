/**
 * What a table shows (page, sort, filters), kept in the address so that a link and the back button find it again.
 * Search words are kept in memory and not in the address: they may be a patient's name.
 *
 * @example
 * const table = useTableAddress('intake', { state: '' }, { sort: 'stateSince' })
 * const { data } = await useFetch('/api/referrals', { query: table.query })
 * table.set({ state: 'received' })
 */
export function useTableAddress<F extends Record<string, string>>(name: string, filters: F, initial: { sort?: string, direction?: 'asc' | 'desc', pageSize?: number } = {}) {
  const route = useRoute()
  const router = useRouter()
  const search = useState(`table-search-${name}`, () => '')
  const text = (key: string) => typeof route.query[key] === 'string' ? route.query[key] as string : undefined

  const page = computed(() => Math.max(1, Number.parseInt(text('page') ?? '1', 10) || 1))
  const sort = computed(() => text('sort') ?? initial.sort)
  const direction = computed<'asc' | 'desc'>(() => text('direction') === 'desc' ? 'desc' : text('direction') === 'asc' ? 'asc' : initial.direction ?? 'asc')
  const filter = computed(() => Object.fromEntries(Object.entries(filters).map(([key, usual]) => [key, text(key) ?? usual])) as F)
  const pageSize = initial.pageSize ?? 50

  /** For `useFetch`; blank filters are left out. */
  const query = computed(() => {
    const all = { ...filter.value, page: page.value, pageSize, sort: sort.value, direction: sort.value ? direction.value : undefined, search: search.value }
    return Object.fromEntries(Object.entries(all).filter(([, value]) => value !== '' && value !== undefined)) as Record<string, string | number>
  })

  /** Changes the address; anything but a page change goes back to page 1. */
  function set(change: Partial<F> & { page?: number, sort?: string, direction?: 'asc' | 'desc' }) {
    const next: Record<string, unknown> = { ...route.query, page: undefined, ...change }
    const kept = Object.entries(next).filter(([key, value]) => value !== undefined && value !== '' && value !== filters[key] && !(key === 'page' && value === 1))
    return router.replace({ query: Object.fromEntries(kept.map(([key, value]) => [key, String(value)])) })
  }

  /** A first click sorts upward, a second one downward. */
  function sortBy(key: string) {
    return set({ sort: key, direction: sort.value === key && direction.value === 'asc' ? 'desc' : 'asc' } as Partial<F> & { sort: string, direction: 'asc' | 'desc' })
  }

  watch(search, () => {
    if (route.query.page) set({ page: 1 } as Partial<F> & { page: number })
  })

  return { page, pageSize, sort, direction, filter, search, query, set, sortBy }
}

export type TableAddress = Pick<ReturnType<typeof useTableAddress>, 'page' | 'pageSize' | 'sort' | 'direction' | 'search' | 'sortBy'> & { set: (change: { page?: number }) => unknown }
