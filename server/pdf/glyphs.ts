/**
 * What the embedded typeface can draw. A character without a glyph would print as an empty box, without any error,
 * so it never reaches the page: signs with a twin are exchanged, anything else is written as its code point, which
 * can be read, searched for and asked about. tests/server/pdf-glyphs.test.ts compares the ranges with the font files.
 */
const twins: Record<string, string> = {
  '\u25B2': '\u2191', '\u25BC': '\u2193', // triangles: the arrows of the same direction
  '\u03BC': '\u00B5', // Greek mu: the micro sign, everywhere
  '\u2744': '*', '\u25CF': '\u2022', // snowflake, filled circle
  '\t': ' ', '\u2028': ' ', '\u2029': ' ', '\uFEFF': '', '\uFE0E': '', '\uFE0F': '', '\u00AD': '',
}

/** Ranges of code points in IBM Plex Sans (Regular, SemiBold and Italic of the shipped files alike). */
const drawn: readonly (readonly [number, number])[] = [
  [0x20, 0x7E], [0xA0, 0x17F], [0x18F, 0x18F], [0x192, 0x192], [0x1A0, 0x1A1], [0x1AF, 0x1B0], [0x1CD, 0x1DC], [0x1FA, 0x1FF], [0x218, 0x21B],
  [0x237, 0x237], [0x259, 0x259], [0x2BB, 0x2BC], [0x2C6, 0x2C7], [0x2D8, 0x2DD], [0x300, 0x304], [0x306, 0x30C], [0x312, 0x312], [0x315, 0x315], [0x31B, 0x31B],
  [0x323, 0x323], [0x326, 0x328], [0x37E, 0x37E], [0x384, 0x38A], [0x38C, 0x38C], [0x38E, 0x3A1], [0x3A3, 0x3CE], [0x400, 0x45F], [0x490, 0x4C2],
  [0x4CF, 0x4D9], [0x4DC, 0x4E9], [0x4EE, 0x4F9], [0xE3F, 0xE3F], [0x1E80, 0x1E85], [0x1E9E, 0x1E9E], [0x1EA0, 0x1EF9], [0x2000, 0x200D], [0x2010, 0x2015],
  [0x2018, 0x201A], [0x201C, 0x201E], [0x2020, 0x2022], [0x2026, 0x2026], [0x202F, 0x2030], [0x2032, 0x2033], [0x2039, 0x203A], [0x2044, 0x2044],
  [0x2070, 0x2070], [0x2074, 0x2079], [0x2080, 0x2089], [0x20AC, 0x20AC], [0x2116, 0x2116], [0x2122, 0x2122], [0x2126, 0x2126], [0x2190, 0x2199],
  [0x2202, 0x2202], [0x2206, 0x2206], [0x220F, 0x220F], [0x2211, 0x2212], [0x2215, 0x2215], [0x2219, 0x221A], [0x221E, 0x221E], [0x222B, 0x222B],
  [0x2236, 0x2236], [0x2248, 0x2248], [0x2260, 0x2260], [0x2264, 0x2265], [0x25CA, 0x25CA], [0x2713, 0x2713], [0xFB01, 0xFB02],
]
export const drawnRanges = drawn

const canDraw = (point: number) => drawn.some(([from, to]) => point >= from && point <= to)
const codePoint = (point: number) => `[U+${point.toString(16).toUpperCase().padStart(4, '0')}]`

/**
 * Text as the typeface can print it. Composed first, so that a letter and its accent find their common glyph.
 *
 * @example printable('▲ 5.2 μV 你') // => '↑ 5.2 µV [U+4F60]'
 */
export function printable(text: string): string {
  return [...text.normalize('NFC')].map((sign) => {
    if (sign === '\n') return sign
    const twin = twins[sign]
    if (twin !== undefined) return twin
    const point = sign.codePointAt(0)!
    return canDraw(point) ? sign : codePoint(point)
  }).join('')
}
