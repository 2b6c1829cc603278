import type { Example } from './harness'

/** Checks of entries that need the published criteria, by entry id. */
export const patternChecks: Record<string, (example: Example) => void> = {}

/** Entries that only the criteria can check and that have no check yet. Each leaves this list when it gets one. */
export const awaitingPatterns: readonly string[] = ['WE-12', 'WE-26', 'WE-32', 'WE-33', 'WE-40']
