import { randomInt } from 'node:crypto'
import { passphraseWords } from './passphrase-words'

/** What a passphrase must hold: guessing it offline against an encrypted PDF has to stay out of reach. */
export const leastBits = 80

/** As many words as the list needs for 80 bits. */
export const wordsNeeded = (listLength: number): number => Math.ceil(leastBits / Math.log2(listLength))

/**
 * A passphrase for a practice: random plain words, each drawn evenly and independently, at least 80 bits in all.
 * It is handed over by telephone or letter, never by mail, and kept sealed.
 *
 * @example makePassphrase() // => 'lagoon quartz tulip walnut bridge otter copper mosaic'
 */
export function makePassphrase(): string {
  return Array.from({ length: wordsNeeded(passphraseWords.length) }, () => passphraseWords[randomInt(passphraseWords.length)]).join(' ')
}
