/** Whoever goes to another page by the keyboard stands on its content afterwards, and not on nothing. */
export default defineNuxtPlugin((nuxtApp) => {
  nuxtApp.hook('page:finish', () => void nextTick(() => {
    if (document.activeElement === document.body && !nuxtApp.isHydrating) document.getElementById('main')?.focus({ preventScroll: true })
  }))
})
