/** Courtesy: sends people to sign in, to set up what they must, or away from a page that is not theirs. The server is the lock. */
export default defineNuxtRouteMiddleware(async (to) => {
  const { user, refresh, may } = useSession()
  if (!user.value && import.meta.server) await refresh().catch(() => null)
  if (to.meta.public) return
  if (!user.value && import.meta.client) await refresh().catch(() => null)
  if (!user.value) return navigateTo({ path: '/sign-in', query: to.fullPath === '/' ? {} : { next: to.fullPath } })
  if (user.value.mustEnrol && to.path !== '/profile') return navigateTo('/profile')
  if (to.meta.allow && !may(to.meta.allow)) return abortNavigation(createError({ statusCode: 403, statusMessage: 'Your role does not open this page.' }))
})
