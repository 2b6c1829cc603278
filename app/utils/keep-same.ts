/**
 * The value as it was where nothing of it changed, so that what is drawn from it is not drawn again.
 *
 * @example
 * const lines = computed<Line[]>(before => keepSame(before, makeLines()))
 */
export function keepSame<T>(before: T | undefined, now: T): T {
  return before !== undefined && JSON.stringify(before) === JSON.stringify(now) ? before : now
}

/** Brings a reactive map to what it should hold; only keys that change are told to those who read them. */
export function syncMap<V>(map: Map<string, V>, next: ReadonlyMap<string, V>): void {
  for (const key of [...map.keys()]) if (!next.has(key)) map.delete(key)
  for (const [key, value] of next) if (map.get(key) !== value) map.set(key, value)
}
