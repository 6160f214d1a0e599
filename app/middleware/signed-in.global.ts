/** Every page but the few that say `public` needs a signed-in person. */
export default defineNuxtRouteMiddleware(async (to) => {
  if (to.meta.public) return
  const person = await useMe().load()
  if (!person) return navigateTo({ path: '/sign-in', query: to.fullPath === '/' ? {} : { to: to.fullPath } })
})
