/**
 * The site the person stands in, chosen in the bar and kept in a cookie. '' means all their sites.
 * `timeZone` is the one to print moments in; `standing` is one definite site, for pages that need one (Bench).
 */
export function useSite() {
  const { user } = useSession()
  const chosen = useCookie('site', { default: () => '', sameSite: 'lax', path: '/', maxAge: 60 * 60 * 24 * 365 })
  const sites = computed(() => user.value?.sites ?? [])
  const site = computed(() => sites.value.find(s => s.id === chosen.value) ?? (sites.value.length === 1 ? sites.value[0] : undefined))
  const siteId = computed({
    get: () => site.value?.id ?? '',
    set: (id: string) => chosen.value = id,
  })
  const standing = computed(() => site.value ?? sites.value[0])
  const timeZone = computed(() => standing.value?.timeZone ?? 'UTC')
  return { sites, site, siteId, standing, timeZone }
}
