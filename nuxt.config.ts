import { fileURLToPath } from 'node:url'
import { formulaCards } from './app/build/formula-cards'
import { bundleWorkers } from './server/workers/bundle'

export default defineNuxtConfig({
  compatibilityDate: '2026-11-01',
  modules: ['@nuxtjs/tailwindcss', '@pinia/nuxt', '@vueuse/nuxt', '@nuxt/icon', 'nuxt-auth-utils', 'nuxt-security', '@nuxt/eslint'],
  telemetry: false,
  devtools: { enabled: false },
  css: ['@fontsource/inter/latin-400.css', '@fontsource/inter/latin-500.css', '@fontsource/inter/latin-600.css', '~/assets/css/tokens.css'],
  app: {
    head: {
      htmlAttrs: { lang: 'en' },
      title: 'Nullbeat',
      meta: [{ name: 'viewport', content: 'width=device-width, initial-scale=1' }, { name: 'color-scheme', content: 'dark light' }],
      link: [{ rel: 'icon', type: 'image/svg+xml', href: 'data:image/svg+xml,%3Csvg xmlns=%22http://www.w3.org/2000/svg%22 viewBox=%220 0 32 32%22%3E%3Cpath d=%22M3 6c12 0 10 3 13 10s2 10 13 10%22 fill=%22none%22 stroke=%22%231d8a74%22 stroke-width=%224%22 stroke-linecap=%22round%22/%3E%3C/svg%3E' }],
    },
  },
  experimental: { componentIslands: false, appManifest: false },
  components: [{ path: '~/components', pathPrefix: false }],
  imports: { dirs: ['stores', 'composables', 'utils'] },
  tailwindcss: { viewer: false, cssPath: ['~/assets/css/tailwind.css', { injectPosition: 'first' }] },
  icon: { provider: 'none', fallbackToApi: false, clientBundle: { scan: true }, serverBundle: { collections: ['lucide'] } },
  auth: { loadStrategy: 'none' },
  security: {
    corsHandler: false,
    removeLoggers: false,
    rateLimiter: false,
    requestSizeLimiter: false,
    xssValidator: false,
    headers: {
      contentSecurityPolicy: {
        'default-src': ['\'self\''],
        'base-uri': ['\'none\''],
        'form-action': ['\'self\''],
        'frame-ancestors': ['\'none\''],
        'img-src': ['\'self\'', 'data:'],
        'font-src': ['\'self\'', 'data:'],
        'object-src': ['\'none\''],
        'script-src': ['\'self\'', '\'nonce-{{nonce}}\''],
        'script-src-attr': ['\'none\''],
        'style-src': ['\'self\'', '\'unsafe-inline\''],
        'connect-src': ['\'self\''],
        'upgrade-insecure-requests': false,
      },
      strictTransportSecurity: { maxAge: 31536000, includeSubdomains: true },
      xFrameOptions: 'DENY',
      crossOriginEmbedderPolicy: false,
      referrerPolicy: 'same-origin',
    },
  },
  runtimeConfig: { session: { name: 'nullbeat-session', password: '' } },
  vite: { worker: { format: 'es' }, plugins: [formulaCards(fileURLToPath(new URL('./shared/physics', import.meta.url)))] },
  typescript: {
    strict: true,
    nodeTsConfig: {
      include: ['../tests/**/*', '../vitest.config.ts', '../drizzle.config.ts', '../server/workers/bundle.ts'],
      compilerOptions: { paths: { '#shared/*': ['../shared/*'], '~~/*': ['../*'], '~/*': ['../app/*'] } },
    },
    tsConfig: { compilerOptions: { noUncheckedIndexedAccess: true } },
  },
  nitro: {
    compressPublicAssets: { gzip: true, brotli: false },
    // Its inner files are imported by path, which the development server cannot resolve when left outside the bundle.
    externals: { inline: ['satellite.js'] },
    typescript: { strict: true },
    hooks: { compiled: nitro => bundleWorkers(nitro.options.output.serverDir) },
    esbuild: { options: { target: 'node20' } },
  },
  eslint: { config: { stylistic: { quotes: 'single', semi: false, indent: 2 } } },
})
