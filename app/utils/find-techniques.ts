import { techniques } from '#shared/catalogue/nerves'
import type { Technique } from '#shared/catalogue/types'

const haystack = (technique: Technique) => `${technique.label} ${technique.recording.label} ${technique.recording.short} ${technique.nerve} ${technique.nerve.includes('fibular') ? 'peroneal' : ''} ${technique.roots} ${technique.kind}`.toLowerCase()

/**
 * Techniques that have every word, in the order of the catalogue: nerve (under its older name too), muscle, root or kind.
 *
 * @example findTechniques('peroneal motor', 8).map(each => each.id) // => ['fibular-motor-edb', 'fibular-motor-ta']
 */
export function findTechniques(words: string, most: number): Technique[] {
  const parts = words.toLowerCase().split(/\s+/).filter(Boolean)
  return techniques.filter(technique => parts.every(part => haystack(technique).includes(part))).slice(0, most)
}
