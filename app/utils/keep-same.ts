/**
 * The value as it was where nothing of it changed, so that what is drawn from it is not drawn again.
 *
 * @example
 * const lines = computed<Line[]>(before => keepSame(before, makeLines()))
 */
export function keepSame<T>(before: T | undefined, now: T): T {
  return before !== undefined && JSON.stringify(before) === JSON.stringify(now) ? before : now
}

/** The same for a list: each line that did not change keeps its object, and the list too when none did. */
export function keepEach<T extends { key: string }>(before: readonly T[], now: T[]): T[] {
  const known = new Map(before.map(each => [each.key, each]))
  const kept = now.map(each => keepSame(known.get(each.key), each))
  return kept.length === before.length && kept.every((each, index) => each === before[index]) ? before as T[] : kept
}

/** Brings a reactive map to what it should hold; only keys that change are told to those who read them. */
export function syncMap<V>(map: Map<string, V>, next: ReadonlyMap<string, V>): void {
  for (const key of [...map.keys()]) if (!next.has(key)) map.delete(key)
  for (const [key, value] of next) if (map.get(key) !== value) map.set(key, value)
}
