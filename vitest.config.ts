import { fileURLToPath } from 'node:url'
import { defineConfig } from 'vitest/config'

const root = fileURLToPath(new URL('.', import.meta.url)).replace(/\/$/, '')
const alias = { '#shared': `${root}/shared`, '~~': root, '~': `${root}/app` }
const env = { TZ: 'Pacific/Chatham' }
/** The long tests, hours of them, run only when asked for: `npm run endurance`. */
const endurance = { resolve: { alias }, test: { name: 'endurance', sequence: { groupOrder: 4 }, include: ['tests/endurance/**/*.test.ts'], env, testTimeout: 4 * 3600_000, hookTimeout: 240_000, globalSetup: ['tests/support/database-setup.ts'], fileParallelism: false } }

export default defineConfig({
  resolve: { alias },
  test: {
    projects: [
      { resolve: { alias }, test: { name: 'physics', include: ['tests/physics/**/*.test.ts'], env, testTimeout: 60_000 } },
      { resolve: { alias }, test: { name: 'unit', include: ['tests/unit/**/*.test.ts', 'tests/architecture/**/*.test.ts'], env, testTimeout: 20_000 } },
      { resolve: { alias }, test: { name: 'domain', sequence: { groupOrder: 1 }, include: ['tests/domain/**/*.test.ts'], env, testTimeout: 60_000, hookTimeout: 60_000, globalSetup: ['tests/support/database-setup.ts'] } },
      { resolve: { alias }, test: { name: 'api', sequence: { groupOrder: 2 }, include: ['tests/api/**/*.test.ts'], env, testTimeout: 60_000, hookTimeout: 120_000, globalSetup: ['tests/support/database-setup.ts'], fileParallelism: false } },
      { resolve: { alias }, test: { name: 'e2e', sequence: { groupOrder: 3 }, include: ['tests/e2e/**/*.test.ts'], env, testTimeout: 240_000, hookTimeout: 240_000, globalSetup: ['tests/support/database-setup.ts'], maxWorkers: 2 } },
      ...(process.env.NULLBEAT_ENDURANCE === '1' ? [endurance] : []),
    ],
  },
})
