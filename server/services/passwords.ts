import { hash, verify, argon2id } from 'argon2'
import { dictionary } from '@zxcvbn-ts/language-common'

/**
 * Argon2id with 19 MiB, two passes, one lane: OWASP's Password Storage Cheat Sheet names this as the least (from memory).
 * 70 to 150 ms on two slow cores, so it never runs inside a transaction.
 */
const COST = { type: argon2id, memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const
/** NIST SP 800-63B-4, 3.1.1.2: 15 characters when the password is the only factor, 8 beside a second one. */
const LEAST_ALONE = 15
const LEAST_WITH_FACTOR = 8
export const MOST_CHARACTERS = 256
const PRODUCT_WORDS = ['orthodrome', 'neurophysiology', 'conduction', 'clinic', 'hospital', 'password', 'passwort']

let commonest: Set<string> | undefined
let noSuchUser: Promise<string> | undefined

/** NFC, so that one password typed on two keyboards is one password; nothing else is changed or cut. */
function normalised(password: string): string {
  return password.normalize('NFC')
}

export async function hashPassword(password: string): Promise<string> {
  return await hash(normalised(password), COST)
}

/**
 * @param stored null or undefined when there is no such person or no password: a hash of nothing is then checked, so
 * that the answer takes as long and says nothing about who exists
 */
export async function verifyPassword(stored: string | null | undefined, password: string): Promise<boolean> {
  const known = stored ?? await (noSuchUser ??= hashPassword('nobody has this password'))
  const right = await verify(known, normalised(password))
  return right && stored !== null && stored !== undefined
}

/**
 * What speaks against a new password, in words for the person; null when nothing does. No rule about kinds of
 * characters: length, the 49,233 commonest passwords, and words that anyone here would guess first.
 * @param ownWords names of the organisation, the sites and the person
 * @example complaintAbout('orthodrome2026', { secondFactor: true, ownWords: [] }) // => 'Leave out …'
 */
export function complaintAbout(password: string, { secondFactor, ownWords }: { secondFactor: boolean, ownWords: readonly string[] }): string | null {
  const text = normalised(password)
  const characters = [...text]
  const least = secondFactor ? LEAST_WITH_FACTOR : LEAST_ALONE
  if (characters.length < least) return `The password must have at least ${least} characters. Several words in a row are easy to remember.`
  if (characters.length > MOST_CHARACTERS) return `The password may have at most ${MOST_CHARACTERS} characters.`
  const lower = text.toLowerCase()
  if (isCommon(lower)) return 'This password is on the list of the commonest passwords. Choose one that nobody else would think of.'
  if (new Set(characters).size < 5) return 'The password repeats the same few characters. Choose several words in a row.'
  const word = guessableWord(lower, ownWords, least)
  return word === null ? null : `Leave out “${word}”, or add more beside it: people who know this clinic would try it first.`
}

/** Also one common password written several times over. */
function isCommon(lower: string): boolean {
  commonest ??= new Set(dictionary['passwords-common'].map(word => word.toLowerCase()))
  if (commonest.has(lower)) return true
  const unit = /^(.+?)\1+$/su.exec(lower)?.[1]
  return unit !== undefined && commonest.has(unit)
}

/** The longest own word found, if without all of them fewer than half of the least characters (letters and digits) remain. */
function guessableWord(lower: string, ownWords: readonly string[], least: number): string | null {
  const words = [...PRODUCT_WORDS, ...ownWords.flatMap(name => name.toLowerCase().split(/[^\p{L}\p{N}]+/u))].filter(word => [...word].length >= 3)
  const found = words.filter(word => lower.includes(word)).sort((a, b) => b.length - a.length)
  let rest = lower
  for (const word of found) rest = rest.replaceAll(word, '')
  return found.length > 0 && [...rest.replace(/[^\p{L}\p{N}]/gu, '')].length < least / 2 ? found[0]! : null
}
