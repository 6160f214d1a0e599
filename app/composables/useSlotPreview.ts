import { refDebounced } from '@vueuse/core'
import type { PreviewSlots } from '#shared/schemas/settings'

export interface PreviewTimes { stationId: string | undefined, linkId?: string, zone?: string, publishAt: string, leadMinutes: number }

/** The coming slots as typed times would have them; asked for a moment after the last key, and only once the times can be read. */
export function useSlotPreview(times: () => PreviewTimes) {
  const preview = shallowRef<PreviewSlots | null>(null)
  const asked = refDebounced(computed(() => JSON.stringify(times())), 300)
  let last = 0
  watch(asked, async () => {
    const { stationId, publishAt, leadMinutes, ...rest } = times()
    const turn = ++last
    if (!stationId || !/^([01]\d|2[0-3]):[0-5]\d$/.test(publishAt) || !(leadMinutes >= 1)) {
      preview.value = null
      return
    }
    try {
      const answer = await callApi('GET /api/slots/preview', { query: { stationId, publishAt, leadMinutes, ...rest } })
      if (turn === last) preview.value = answer
    }
    catch {
      // The form itself says what is wrong with a field; without an answer there is nothing to preview.
      if (turn === last) preview.value = null
    }
  }, { immediate: import.meta.client })
  return preview
}
