import { mkdirSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { clusterMajor, ensureRole, initialiseCluster, startCluster } from './cluster.mjs'
import { placeCluster } from './cluster-user.mjs'
import { readIfThere, writeWhole } from './files.mjs'
import { freeLoopbackPort } from './ports.mjs'
import { ensurePostgres } from './postgres-programs.mjs'
import { step } from './say.mjs'

/**
 * The programs for the cluster of this checkout: those of the version that made it, if it is there.
 *
 * @param {string} dataFolder
 */
export function ensureOwnPrograms(dataFolder) {
  return ensurePostgres(clusterMajor(placeCluster(dataFolder).folder))
}

/**
 * Starts the product's own cluster, made at the first start and kept, on the port it had before if that is free.
 *
 * @param {string} dataFolder
 * @param {import('./secrets.mjs').Secrets} secrets
 * @returns {Promise<import('./cluster.mjs').RunningCluster & { databaseUrl: string }>}
 */
export async function startOwnDatabase(dataFolder, secrets) {
  const programs = await ensureOwnPrograms(dataFolder)
  const place = { programs, ...placeCluster(dataFolder) }
  mkdirSync(dirname(place.folder), { recursive: true })
  if (clusterMajor(place.folder) === undefined) step('Making the database')
  await initialiseCluster(place, secrets.clusterPassword)
  const portFile = join(dataFolder, 'postgres.port')
  const port = await freeLoopbackPort(Number(readIfThere(portFile)) || undefined)
  writeWhole(portFile, `${port}\n`)
  const cluster = await startCluster(place, { port, password: secrets.clusterPassword, logFile: join(dataFolder, 'postgres.log') })
  await ensureRole(cluster.url('postgres', secrets.clusterPassword, 'postgres'), { name: 'nullbeat', password: secrets.databasePassword })
  return { ...cluster, databaseUrl: cluster.url('nullbeat', secrets.databasePassword, 'nullbeat') }
}
