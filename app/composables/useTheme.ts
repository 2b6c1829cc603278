export const themes = ['system', 'light', 'dark'] as const
export type Theme = (typeof themes)[number]

/** The theme, kept in a cookie so that the server paints the right one at once. 'system' follows the machine. */
export function useTheme() {
  return useCookie<Theme>('theme', { default: () => 'system', sameSite: 'lax', path: '/', maxAge: 60 * 60 * 24 * 365 })
}
