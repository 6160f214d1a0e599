// The long tests, at the full length that promises name: hours. `npm test` runs the same scenarios shortened.
process.env.NULLBEAT_ENDURANCE = '1'
process.argv.push('--project', 'endurance')
await import('./test.mjs')
