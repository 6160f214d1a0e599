import { chartColours } from '~/utils/chart-theme'

type Colours = Record<keyof typeof chartColours, string>

/**
 * The colours of charts as they stand on this ground, for a package that reckons with colours and cannot take CSS
 * variables. Follows the theme; in the browser only, null before.
 */
export function useChartColours() {
  const colours = shallowRef<Colours | null>(null)
  const read = () => {
    const style = getComputedStyle(document.documentElement)
    colours.value = Object.fromEntries(Object.entries(chartColours).map(([name, value]) => [name, style.getPropertyValue(value.slice(4, -1)).trim()])) as Colours
  }
  onMounted(read)
  if (import.meta.client) {
    useMutationObserver(document.documentElement, read, { attributes: true, attributeFilter: ['data-theme'] })
    watch(usePreferredDark(), read)
  }
  return colours
}
