export interface ReadSample { name: string, labels: Record<string, string>, value: number }
export interface ReadFamily { help: string, type: string, samples: ReadSample[] }

/**
 * Reads Prometheus' text format 0.0.4 strictly, as its documentation has it: HELP, then TYPE, then samples of that
 * family and no other; counters end in _total; nothing twice; a line feed at the end.
 * @throws where the text is otherwise
 */
export function readExposition(text: string): Map<string, ReadFamily> {
  const fail = (line: string): never => { throw new Error(`Not in the format: ${line}`) }
  if (!text.endsWith('\n')) fail('no line feed at the end')
  const families = new Map<string, ReadFamily>()
  let present = ''
  for (const line of text.slice(0, -1).split('\n')) {
    const [, keyword, name, rest] = /^# (HELP|TYPE) ([a-zA-Z_:][\w:]*) (.*)$/.exec(line) ?? []
    if (keyword === 'HELP') {
      if (families.has(name!)) fail(line)
      families.set(name!, { help: rest!, type: '', samples: [] })
      present = name!
    }
    else if (keyword === 'TYPE') {
      const family = families.get(name!)
      if (name !== present || !family || family.samples.length > 0 || !['counter', 'gauge', 'histogram'].includes(rest!) || (rest === 'counter' && !name!.endsWith('_total'))) fail(line)
      family!.type = rest!
    }
    else {
      const sample = readSample(line) ?? fail(line)
      const family = families.get(present)
      const suffixes = family?.type === 'histogram' ? ['_bucket', '_sum', '_count'] : ['']
      if (!family?.type || !suffixes.some(suffix => sample.name === present + suffix)) fail(line)
      if (family!.samples.some(other => other.name === sample.name && JSON.stringify(Object.entries(other.labels).sort()) === JSON.stringify(Object.entries(sample.labels).sort()))) fail(`twice: ${line}`)
      family!.samples.push(sample)
    }
  }
  return families
}

function readSample(line: string): ReadSample | null {
  const [, name, braces, number] = /^([a-zA-Z_:][\w:]*)(?:\{(.*)\})? (NaN|[+-]Inf|-?\d+(?:\.\d+)?(?:e[+-]?\d+)?)$/.exec(line) ?? []
  if (!name) return null
  const labels: Record<string, string> = {}
  let left = braces ?? ''
  while (left !== '') {
    const [whole, label, value] = /^([a-zA-Z_]\w*)="((?:[^"\\]|\\\\|\\n|\\")*)"(?:,|$)/.exec(left) ?? []
    if (!whole || label! in labels) return null
    labels[label!] = value!.replace(/\\(.)/g, (_, sign: string) => sign === 'n' ? '\n' : sign)
    left = left.slice(whole.length)
  }
  return { name, labels, value: number === '+Inf' ? Infinity : number === '-Inf' ? -Infinity : Number(number) }
}
