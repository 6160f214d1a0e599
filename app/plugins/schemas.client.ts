import { z } from 'zod'

/** Schemas are interpreted in the browser: the compiled form needs eval, which the content security policy forbids. */
export default defineNuxtPlugin({ name: 'schemas', enforce: 'pre', setup: () => void z.config({ jitless: true }) })
