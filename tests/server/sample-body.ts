import * as z from 'zod'

interface JsonSchema { type?: string, properties?: Record<string, JsonSchema>, required?: string[], items?: JsonSchema, enum?: unknown[], const?: unknown, anyOf?: JsonSchema[], oneOf?: JsonSchema[], allOf?: JsonSchema[], format?: string, minLength?: number, minimum?: number, exclusiveMinimum?: number, minItems?: number, default?: unknown, pattern?: string }

/**
 * The smallest thing that a schema takes, made from the schema itself, so that a route's own checks are reached and not
 * only its form. `known` gives the values of fields by name, for example ids.
 * @example sampleOf(z.object({ siteId: z.string(), reason: z.string().min(3) }), { siteId: 's1' }) // => { siteId: 's1', reason: 'aaa' }
 */
export function sampleOf(schema: z.ZodType, known: Record<string, unknown>): unknown {
  return valueOf(z.toJSONSchema(schema, { io: 'input', unrepresentable: 'any' }) as JsonSchema, known)
}

function valueOf(schema: JsonSchema, known: Record<string, unknown>): unknown {
  if (schema.const !== undefined) return schema.const
  if (schema.enum) return schema.enum[0]
  const choice = (schema.anyOf ?? schema.oneOf)?.find(one => one.type !== 'null') ?? schema.allOf?.[0]
  if (choice) return valueOf(choice, known)
  if (schema.type === 'object') return Object.fromEntries(Object.entries(schema.properties ?? {}).filter(([name]) => name in known || schema.required?.includes(name)).map(([name, one]) => [name, name in known ? known[name] : valueOf(one, known)]))
  if (schema.type === 'array') return Array.from({ length: schema.minItems ?? 0 }, () => valueOf(schema.items ?? {}, known))
  if (schema.type === 'boolean') return true
  if (schema.type === 'integer' || schema.type === 'number') return Math.max(schema.minimum ?? 1, (schema.exclusiveMinimum ?? 0) + 1)
  if (schema.type === 'string') return textOf(schema)
  return schema.default ?? null
}

function textOf({ format, minLength }: JsonSchema): string {
  if (format === 'date') return '2026-12-10'
  if (format === 'email') return 'sample@elsewhere.example'
  return 'a'.repeat(Math.max(minLength ?? 1, 3))
}
