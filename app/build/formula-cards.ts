import { readFileSync, readdirSync } from 'node:fs'
import { join } from 'node:path'
import type { Plugin } from 'vite'
import { readCards } from '../../shared/formats/formula-cards'

const NAME = 'virtual:formula-cards'
const RESOLVED = `\0${NAME}`

/** The cards of every source file of the core as a module, read when the application is built: they cannot differ from the code that runs. */
export function formulaCards(physicsFolder: string): Plugin {
  return {
    name: 'formula-cards',
    resolveId: id => id === NAME ? RESOLVED : null,
    load(id) {
      if (id !== RESOLVED) return null
      const files = readdirSync(physicsFolder, { recursive: true, encoding: 'utf8' }).filter(file => file.endsWith('.ts')).sort()
      const cards = files.flatMap((file) => {
        this.addWatchFile(join(physicsFolder, file))
        return readCards(file.replaceAll('\\', '/'), readFileSync(join(physicsFolder, file), 'utf8'))
      })
      return `export const cards = ${JSON.stringify(cards)}`
    },
  }
}
