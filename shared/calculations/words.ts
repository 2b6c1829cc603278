import { nerveLabels } from '../catalogue/nerves'
import type { Technique } from '../catalogue/types'
import type { Side } from '../schemas/common'
import type { Absence } from '../schemas/study'

/** Sides in capitals wherever a person reads them. */
export const sideWords: Record<Side, string> = { right: 'RIGHT', left: 'LEFT' }

/** Absences as a reason within a sentence: "no response at wrist". */
export const absenceAt: Record<Absence, string> = { 'no-response': 'no response', 'technical': 'not recordable', 'not-done': 'not done', 'stopped': 'stopped' }

export const otherSide = (side: Side): Side => side === 'right' ? 'left' : 'right'

const kindWords: Record<Technique['kind'], string> = {
  'motor': 'motor', 'sensory': 'sensory', 'mixed': 'mixed', 'f-wave': 'F-wave', 'h-reflex': 'H-reflex', 'repetitive': 'repetitive stimulation', 'blink': 'blink reflex', 'needle': 'needle',
}

/**
 * Nerve and kind, short: for "no left ulnar motor run".
 *
 * @example
 * nerveAndKind(techniqueOf('ulnar-sensory-d5')!) // => 'ulnar sensory'
 */
export function nerveAndKind(technique: Technique): string {
  return `${nerveLabels[technique.nerve] ?? technique.nerve} ${kindWords[technique.kind]}`
}

/** Starts a sentence with a capital. */
export function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1)
}

/** "a", "a and b", "a, b and c". */
export function listed(items: readonly string[]): string {
  return items.length < 2 ? items.join('') : `${items.slice(0, -1).join(', ')} and ${items[items.length - 1]}`
}
