import { readFileSync, readdirSync } from 'node:fs'
import { dirname, join, relative, sep } from 'node:path'
import { fileURLToPath } from 'node:url'

const root = fileURLToPath(new URL('../..', import.meta.url))

export interface SourceFile {
  /** From the root, with slashes. */
  path: string
  text: string
  /** What it imports: a path from the root for the project's own files, the bare name for a package. */
  imports: string[]
}

/** Source files below a folder of the project; none if there is no such folder. */
export function sourceFiles(folder: string): SourceFile[] {
  let entries
  try {
    entries = readdirSync(join(root, folder), { recursive: true, withFileTypes: true })
  }
  catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return []
    throw error
  }
  return entries.filter(entry => entry.isFile() && /\.(ts|mts|mjs|js|vue)$/.test(entry.name)).map((entry) => {
    const path = relative(root, join(entry.parentPath, entry.name)).split(sep).join('/')
    const text = readFileSync(join(root, path), 'utf8')
    return { path, text, imports: importsOf(path, text) }
  }).sort((a, b) => a.path < b.path ? -1 : 1)
}

const statement = /(?:^|\n)\s*(?:import|export)\s(?:[^'"`;]*?\sfrom\s*)?['"]([^'"]+)['"]|\bimport\(\s*['"]([^'"]+)['"]\s*\)|\brequire\(\s*['"]([^'"]+)['"]\s*\)/g

/** Static and dynamic imports and re-exports, those of types too. */
export function importsOf(path: string, text: string): string[] {
  return [...text.matchAll(statement)].map(match => fromRoot(path, (match[1] ?? match[2] ?? match[3])!))
}

function fromRoot(path: string, specifier: string): string {
  if (specifier.startsWith('.')) return join(dirname(path), specifier).split(sep).join('/')
  return specifier.replace(/^(~~|@@)\//, '').replace(/^(~|@)\/(?=[a-z])/, 'app/').replace(/^#shared\//, 'shared/')
}
