import { fileURLToPath } from 'node:url'
import { build } from 'esbuild'

const root = fileURLToPath(new URL('../..', import.meta.url))

/**
 * Bundles the worker by itself: a chunk made by the server's own bundler would import the server's entry and
 * start a second server.
 */
export async function bundleWorkers(serverDir: string): Promise<void> {
  await build({
    entryPoints: [`${root}/server/workers/predict.ts`],
    outfile: `${serverDir}/workers/predict.mjs`,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    alias: { '#shared': `${root}/shared`, '~~': root },
    logLevel: 'warning',
  })
}
