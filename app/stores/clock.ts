import { defineStore } from 'pinia'

/** The server's time, once a second. Countdowns run on it, whatever the browser's own clock says. */
export const useClock = defineStore('clock', () => {
  const offsetMs = ref(0)
  const now = ref(0)
  const measured = ref(false)

  async function synchronise() {
    const before = Date.now()
    const answer = await callApi('GET /api/clock', {}, useRequestFetch() as never).catch(() => null)
    if (!answer) return
    const after = Date.now()
    offsetMs.value = Date.parse(answer.now) - (before + after) / 2
    now.value = Date.now() + offsetMs.value
    // What the page's server measures says nothing about the browser's clock.
    measured.value = import.meta.client
  }
  function tick() {
    now.value = Date.now() + offsetMs.value
  }
  /** Said on the page: a wrong browser clock makes a person distrust the right numbers. */
  const browserClockWrong = computed(() => measured.value && Math.abs(offsetMs.value) > 2000)
  return { now, offsetMs, browserClockWrong, synchronise, tick }
})
