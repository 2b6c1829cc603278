import { createHash } from 'node:crypto'

/**
 * One text for one value, whatever order its keys were written in: keys sorted by code unit, no white space,
 * numbers as ECMAScript prints them, strings as JSON. The rules of RFC 8785 (JSON Canonicalization Scheme),
 * which rest on the same number and string printing as `JSON.stringify`.
 *
 * `undefined` members are left out as JSON does; a number that is not finite is refused, since JSON would
 * silently write null for it.
 *
 * @example
 * canonicalJson({ b: 1, a: [true, 'µ'] }) // => '{"a":[true,"µ"],"b":1}'
 */
export function canonicalJson(value: unknown): string {
  if (value === null || typeof value === 'boolean' || typeof value === 'string') return JSON.stringify(value)
  if (typeof value === 'number') return canonicalNumber(value)
  if (Array.isArray(value)) return `[${value.map(item => canonicalJson(item === undefined ? null : item)).join(',')}]`
  if (typeof value === 'object') return canonicalObject(value as Record<string, unknown>)
  throw new TypeError(`A ${typeof value} has no canonical JSON.`)
}

function canonicalNumber(value: number): string {
  if (!Number.isFinite(value)) throw new TypeError('A number that is not finite has no canonical JSON.')
  return JSON.stringify(value)
}

function canonicalObject(value: Record<string, unknown>): string {
  const members = Object.keys(value)
    .filter(key => value[key] !== undefined)
    .sort()
    .map(key => `${JSON.stringify(key)}:${canonicalJson(value[key])}`)
  return `{${members.join(',')}}`
}

/**
 * SHA-256 of a text in UTF-8 or of bytes, in lower-case hexadecimal.
 *
 * @example
 * sha256Hex('abc') // => 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad' (FIPS 180-4, example)
 */
export function sha256Hex(content: string | Uint8Array): string {
  return createHash('sha256').update(content).digest('hex')
}
