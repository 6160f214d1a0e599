import type { UploadBrief, UploadOut } from '#shared/schemas/elements'

const isInHand = (upload: Pick<UploadBrief, 'state'> | null) => upload?.state === 'receiving' || upload?.state === 'reading'

/**
 * Sends a file or pasted text and follows it to its report. Which upload is looked at stands in the address: after a
 * reload, or opened from the list, it is followed on from where it is.
 */
export function useUpload(done: () => unknown) {
  const route = useRoute()
  const uploadId = computed(() => typeof route.query.upload === 'string' ? route.query.upload : null)
  const report = shallowRef<UploadOut | null>(null)
  const sentShare = ref<number | null>(null)
  const lost = ref(false)
  let sending: AbortController | null = null
  const show = (id: string | undefined) => navigateTo({ query: { ...route.query, upload: id } }, { replace: true })

  const send = useAction(async (what: File | string) => {
    const body = new FormData()
    // Pasted text goes without a file's name: it is none.
    if (typeof what === 'string') body.append('file', what)
    else body.append('file', what)
    sending = new AbortController()
    sentShare.value = 0
    report.value = null
    try {
      const answer = await sendUpload(body, { signal: sending.signal, onSent: (share) => { sentShare.value = share } })
      report.value = answer
      await show(answer.id)
      if (!isInHand(answer)) await done()
    }
    catch (error) {
      if (!sending.signal.aborted) throw error
    }
    finally {
      sentShare.value = null
      sending = null
    }
  })

  async function look() {
    if (!uploadId.value) return
    report.value = await callApi('GET /api/element-sets/uploads/{id}', { params: { id: uploadId.value } }).catch(() => null)
  }
  // The browser opens a lost stream anew by itself.
  let stream: EventSource | null = null
  function follow() {
    stream?.close()
    stream = new EventSource(`/api/element-sets/uploads/${uploadId.value}/events`)
    stream.addEventListener('open', () => { lost.value = false })
    stream.addEventListener('error', () => { lost.value = true })
    stream.addEventListener('upload', async (event: MessageEvent<string>) => {
      const brief = JSON.parse(event.data) as UploadBrief
      if (report.value?.id === brief.id) report.value = { ...report.value, ...brief }
      if (isInHand(brief)) return
      stop()
      await look()
      await done()
    })
  }
  function stop() {
    stream?.close()
    stream = null
    lost.value = false
  }
  onMounted(() => watch(uploadId, async (id) => {
    stop()
    if (!id) report.value = null
    else if (report.value?.id !== id) await look()
    if (id && isInHand(report.value)) follow()
  }, { immediate: true }))
  onBeforeUnmount(stop)

  const cancel = useAction(async () => {
    if (sending) return sending.abort()
    if (report.value) report.value = await callApi('POST /api/element-sets/uploads/{id}/cancel', { params: { id: report.value.id } })
  })
  return { report, send, cancel, show, sentShare, lost, close: () => show(undefined) }
}
