import { expect, it } from 'vitest'
import { leastBits, makePassphrase, wordsNeeded } from '#server/services/make-passphrase'
import { passphraseWords } from '#server/services/passphrase-words'

it('the list has at least 1,024 different plain words', () => {
  expect(passphraseWords.length).toBeGreaterThanOrEqual(1024)
  expect(new Set(passphraseWords).size).toBe(passphraseWords.length)
  expect(passphraseWords.filter(word => !/^[a-z]{3,10}$/.test(word))).toEqual([])
})

it('a passphrase holds 80 bits or more', () => {
  const words = makePassphrase().split(' ')
  expect(words.every(word => passphraseWords.includes(word))).toBe(true)
  expect(words.length * Math.log2(passphraseWords.length)).toBeGreaterThanOrEqual(leastBits)
  expect(wordsNeeded(1024)).toBe(8)
  expect(wordsNeeded(2)).toBe(80)
})

it('draws over the whole list and never twice the same phrase', () => {
  const phrases = Array.from({ length: 400 }, makePassphrase)
  expect(new Set(phrases).size).toBe(400)
  const seen = new Set(phrases.flatMap(phrase => phrase.split(' ')))
  // 3,200 draws from n words leave about n·e^(-3200/n) unseen: far more than half must appear.
  expect(seen.size).toBeGreaterThan(passphraseWords.length * 0.85)
})
