export interface Schema {
  type?: string
  format?: string
  enum?: unknown[]
  const?: unknown
  anyOf?: Schema[]
  oneOf?: Schema[]
  allOf?: Schema[]
  items?: Schema
  prefixItems?: Schema[]
  properties?: Record<string, Schema>
  required?: string[]
  additionalProperties?: Schema | boolean
  description?: string
  default?: unknown
  $ref?: string
  minimum?: number
  maximum?: number
  exclusiveMinimum?: number
  minLength?: number
  maxLength?: number
}

const literal = (value: unknown) => JSON.stringify(value)
const alternatives = ({ anyOf, oneOf }: Schema) => anyOf ?? oneOf

/** Within what a number or a text must be, in few signs. */
function bounds({ minimum, maximum, exclusiveMinimum, minLength, maxLength }: Schema): string {
  const lowest = exclusiveMinimum !== undefined ? `> ${exclusiveMinimum}` : minimum !== undefined && minimum > -Number.MAX_SAFE_INTEGER ? `≥ ${minimum}` : ''
  const highest = maximum !== undefined && maximum < Number.MAX_SAFE_INTEGER ? `≤ ${maximum}` : ''
  const length = minLength !== undefined || maxLength !== undefined ? `${minLength ?? 0} to ${maxLength ?? 'any'} signs` : ''
  return [lowest, highest, length].filter(Boolean).join(', ')
}

/** A JSON Schema (2020-12) as a person reads it: members one a line, a question mark behind what may be left out. */
export function schemaText(schema: Schema, indent = ''): string {
  if (schema.$ref) return schema.$ref.split('/').at(-1)!
  if (schema.const !== undefined) return literal(schema.const)
  if (schema.enum) return schema.enum.map(literal).join(' | ')
  const several = alternatives(schema)
  if (several) return [...new Set(several.map(one => schemaText(one, indent)))].join(' | ')
  if (schema.allOf) return schema.allOf.map(one => schemaText(one, indent)).join(' & ')
  if (schema.type === 'array') {
    if (schema.prefixItems) return `[${schema.prefixItems.map(item => schemaText(item, indent)).join(', ')}]`
    const item = schema.items ? schemaText(schema.items, indent) : 'any'
    return item.includes(' | ') && !item.startsWith('{') ? `(${item})[]` : `${item}[]`
  }
  if (schema.properties) return membersText(schema.properties, schema.required ?? [], indent)
  if (schema.type === 'object') return typeof schema.additionalProperties === 'object' ? `{ [name]: ${schemaText(schema.additionalProperties, indent)} }` : 'object'
  const within = bounds(schema)
  return `${schema.format ?? schema.type ?? 'any'}${within && !schema.format ? ` (${within})` : ''}`
}

function membersText(properties: Record<string, Schema>, required: readonly string[], indent: string): string {
  const inner = `${indent}  `
  const lines = Object.entries(properties).map(([name, member]) => {
    const aside = [member.default !== undefined ? `else ${literal(member.default)}` : '', member.description ?? ''].filter(Boolean).join('; ')
    return `${inner}${name}${required.includes(name) ? '' : '?'}: ${schemaText(member, inner)}${aside ? `  — ${aside}` : ''}`
  })
  return lines.length === 0 ? '{}' : `{\n${lines.join('\n')}\n${indent}}`
}
