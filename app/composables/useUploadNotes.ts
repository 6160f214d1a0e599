import type { NoteOut, UploadOut } from '#shared/schemas/elements'

const atOnce = 1000

/** Remarks on an upload beyond the thousand that its own answer holds, fetched as they are asked for. */
export function useUploadNotes(report: Ref<UploadOut | null>) {
  const more = ref<Record<'refusal' | 'warning', NoteOut[]>>({ refusal: [], warning: [] })
  const cursors: Partial<Record<'refusal' | 'warning', string | null>> = {}
  watch(() => report.value?.id, () => {
    more.value = { refusal: [], warning: [] }
    delete cursors.refusal
    delete cursors.warning
  })
  const refusals = computed(() => [...report.value?.refusals ?? [], ...more.value.refusal])
  const warnings = computed(() => [...report.value?.warnings ?? [], ...more.value.warning])

  const fetchMore = useAction(async (kind: 'refusal' | 'warning') => {
    const page = (cursor?: string) => callApi('GET /api/element-sets/uploads/{id}/notes', { params: { id: report.value!.id }, query: { kind, limit: atOnce, cursor } })
    // The first page is in the report already; only where it ends is asked for.
    if (cursors[kind] === undefined) cursors[kind] = (await page()).nextCursor
    const cursor = cursors[kind]
    if (!cursor) return
    const { items, nextCursor } = await page(cursor)
    more.value = { ...more.value, [kind]: [...more.value[kind], ...items] }
    cursors[kind] = nextCursor
  })
  return { refusals, warnings, fetchMore }
}
