/** What was just done, said once: on this page, or carried to the next one. */
export function useSaid() {
  const carried = useState('carried-words', () => '')
  const said = ref(carried.value)
  onMounted(() => {
    carried.value = ''
  })
  function carry(words: string) {
    carried.value = words
  }
  return { said, carry }
}
