export const themes = ['auto', 'day', 'night', 'low-light'] as const
export type Theme = typeof themes[number]
export const themeNames: Record<Theme, string> = { 'auto': 'As the system', 'day': 'Day', 'night': 'Night', 'low-light': 'Low light' }

/** Kept in a cookie, so that the server renders the right ground and a reload never flashes. */
export function useTheme() {
  const cookie = useCookie<Theme>('theme', { default: () => 'auto', maxAge: 365 * 86_400, sameSite: 'lax', path: '/' })
  const theme = computed<Theme>({
    get: () => themes.includes(cookie.value) ? cookie.value : 'auto',
    set: (value) => { cookie.value = value },
  })
  return theme
}
