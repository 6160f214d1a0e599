import type { UploadOut } from '#shared/schemas/elements'

/** Sends a file or pasted text and follows its reading; the report's id stands in the address, so it survives a reload. */
export function useUpload(done: () => unknown) {
  const route = useRoute()
  const report = ref<UploadOut | null>(null)
  const uploadId = computed(() => typeof route.query.upload === 'string' ? route.query.upload : null)

  const send = useAction(async (what: File | string) => {
    const body = new FormData()
    if (typeof what === 'string') body.append('file', new Blob([what], { type: 'text/plain' }), 'pasted text')
    else body.append('file', what)
    report.value = await callApi('POST /api/element-sets/uploads', { body })
    await navigateTo({ query: { ...route.query, upload: report.value.id } }, { replace: true })
    await done()
  })
  async function follow() {
    if (!uploadId.value) return
    report.value = await callApi('GET /api/element-sets/uploads/{id}', { params: { id: uploadId.value } }).catch(() => null)
    if (report.value?.state === 'finished') await done()
  }
  onMounted(follow)
  useIntervalFn(() => {
    if (report.value && (report.value.state === 'reading' || report.value.state === 'receiving')) void follow()
  }, 700)
  function close() {
    report.value = null
    void navigateTo({ query: { ...route.query, upload: undefined } }, { replace: true })
  }
  return { report, send, close }
}
