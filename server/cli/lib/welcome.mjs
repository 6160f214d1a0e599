/**
 * What the start command says once people can work.
 *
 * @param {import('./settings.mjs').Settings} settings
 * @param {import('./secrets.mjs').Secrets} secrets
 * @param {string | undefined} firstAdministrator
 * @returns {string}
 */
export function welcome(settings, secrets, firstAdministrator) {
  const lines = ['', `  Nullbeat is at ${settings.publicUrl}`, '']
  if (!settings.databaseUrl) {
    const roles = [['flight', 'flight dynamics'], ['operator', 'operator'], ['oncall', 'on-call engineer'], ['admin', 'administrator'], ['reader', 'reader']]
    lines.push('  Demo: Tern Bay Space Cooperative. Sign in as', '')
    for (const [name, role] of roles) lines.push(`    ${`${name}@tern-bay.example`.padEnd(28)}${role}`)
    lines.push('', `  each with the password ${settings.demoPassword ?? secrets.demoPassword}`, '')
  }
  else if (firstAdministrator) {
    lines.push('  There is nobody yet. Make the first administrator at this address, which works once:', '', `    ${firstAdministrator}`, '')
  }
  if (!settings.smtpUrl) lines.push(`  Mail stays inside: read it at ${settings.publicUrl}/demo/mail`)
  lines.push('  Stop with Ctrl-C. The log is .data/server.log', '')
  return lines.join('\n')
}
