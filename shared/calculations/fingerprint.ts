/**
 * FNV-1a over a text: tells whether words and the numbers in them are still the same. No secret and no signature.
 *
 * @example
 * fingerprint('4.2 ms') === fingerprint('4.3 ms') // => false
 */
export function fingerprint(text: string): string {
  let state = 0x811C9DC5
  for (let index = 0; index < text.length; index += 1) state = Math.imul(state ^ text.charCodeAt(index), 0x01000193)
  return (state >>> 0).toString(16).padStart(8, '0')
}
