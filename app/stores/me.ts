import { defineStore } from 'pinia'
import type { Permission } from '#shared/permissions'
import { may as mayDo } from '#shared/permissions'
import type { PersonOut } from '#shared/schemas/people'

/** Who is signed in, and what they may do. */
export const useMe = defineStore('me', () => {
  const person = ref<PersonOut | null>(null)
  const asked = ref(false)

  /** Asks the server once a page load; null when nobody is signed in. */
  async function load(): Promise<PersonOut | null> {
    if (!asked.value) {
      try {
        person.value = await callApi('GET /api/auth/me', {}, useRequestFetch() as never)
      }
      catch (error) {
        if (asProblem(error).status !== 401) throw error
        person.value = null
      }
      asked.value = true
    }
    return person.value
  }
  async function signOut() {
    await callApi('POST /api/auth/sign-out')
    person.value = null
    // A full load drops everything the browser held for this person.
    window.location.assign('/sign-in')
  }
  function set(to: PersonOut) {
    person.value = to
    asked.value = true
  }
  const may = (permission: Permission) => person.value !== null && mayDo(person.value.roles, permission)
  return { person, asked, load, set, signOut, may }
})
