/** Whether this server is a demonstration, for pages without a session; read on the server, carried in the page. */
export function useDemonstration() {
  return useState('demonstration', () => import.meta.server ? String(useRuntimeConfig().demo) === '1' : false)
}
