/**
 * Two people who could be mistaken for each other have the same key: titles, accents, case, punctuation and the order of
 * the parts of the name are left aside.
 *
 * @example nameKey('Prof. Müller, Jana') === nameKey('Dr Jana Muller') // => true
 */
export function nameKey(name: string): string {
  const plain = name.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase().replace(/ł/g, 'l').replace(/ø/g, 'o').replace(/đ/g, 'd').replace(/ß/g, 'ss')
  const words = plain.split(/[^\p{L}\p{N}]+/u).filter(word => word && !titles.has(word))
  return words.sort().join(' ')
}

const titles = new Set(['dr', 'prof', 'professor', 'doctor', 'mr', 'mrs', 'ms', 'md', 'phd', 'med', 'mudr'])
