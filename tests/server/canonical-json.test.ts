import { describe, expect, it } from 'vitest'
import { canonicalJson, sha256Hex } from '#server/services/canonical-json'

describe('canonicalJson', () => {
  const table: [string, unknown, string][] = [
    ['key order does not matter', { b: 1, a: { d: 2, c: 3 } }, '{"a":{"c":3,"d":2},"b":1}'],
    ['arrays keep their order', [3, 1, 2], '[3,1,2]'],
    ['undefined members are left out', { a: undefined, b: null }, '{"b":null}'],
    ['undefined in an array is null', [undefined, 1], '[null,1]'],
    ['minus zero is zero (RFC 8785, section 3.2.2.3)', -0, '0'],
    ['large numbers as ECMAScript prints them', 1e21, '1e+21'],
    ['micro sign and degree stay as they are', 'µ°≤', '"µ°≤"'],
    ['control characters are escaped', '\u0000\n', '"\\u0000\\n"'],
    ['keys sort by code unit, not by locale', { ä: 1, z: 2, Z: 3 }, '{"Z":3,"z":2,"ä":1}'],
  ]
  it.each(table)('%s', (_name, value, text) => {
    expect(canonicalJson(value)).toBe(text)
  })
  it('refuses what JSON would lose', () => {
    expect(() => canonicalJson({ a: Number.NaN })).toThrow(TypeError)
    expect(() => canonicalJson({ a: Infinity })).toThrow(TypeError)
    expect(() => canonicalJson({ a: () => 1 })).toThrow(TypeError)
  })
  it('survives a round trip', () => {
    const text = canonicalJson({ x: [1.5, 'a', { y: null }], w: false })
    expect(canonicalJson(JSON.parse(text))).toBe(text)
  })
})

it('sha256Hex gives the published digest of "abc" (FIPS 180-4)', () => {
  expect(sha256Hex('abc')).toBe('ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad')
})
