/**
 * The queues and their habits: read by the server and by the migration, which makes them.
 *
 * @type {Record<'predict' | 'mail' | 'web-hook' | 'auto-use', import('pg-boss').Queue>}
 */
export const queues = {
  'auto-use': { name: 'auto-use', policy: 'short', retryLimit: 3, retryDelay: 5, retryBackoff: true, expireInSeconds: 120 },
  // `short` keeps one waiting job per singleton key: many causes in a row lead to one computation.
  predict: { name: 'predict', policy: 'short', retryLimit: 3, retryDelay: 2, retryBackoff: true, expireInSeconds: 300 },
  // A mail server may be down for a night: a try a minute, for a day, before a mail counts as failed.
  // Ten tries more over some eight hours, the pause doubling from half a minute, before a message counts as given up.
  'web-hook': { name: 'web-hook', policy: 'standard', retryLimit: 10, retryDelay: 30, retryBackoff: true, expireInSeconds: 60 },
  mail: { name: 'mail', policy: 'standard', retryLimit: 1440, retryDelay: 60, retryBackoff: false, expireInSeconds: 60 },
}

/**
 * Makes the queue's tables and the queues where they are missing, and gives existing queues their present habits.
 *
 * @param {string} databaseUrl
 * @returns {Promise<void>}
 */
export async function prepareQueues(databaseUrl) {
  const { default: PgBoss } = await import('pg-boss')
  const boss = new PgBoss({ connectionString: databaseUrl, application_name: 'nullbeat-migrate', max: 1, supervise: false, schedule: false })
  boss.on('error', () => {})
  await boss.start()
  try {
    for (const queue of Object.values(queues)) {
      await boss.createQueue(queue.name, queue)
      await boss.updateQueue(queue.name, queue)
    }
  }
  finally {
    await boss.stop({ graceful: false })
  }
}
