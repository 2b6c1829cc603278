import type { PersonHere } from '#shared/schemas/presence'

/** Whoever says nothing for this long is gone: a page says where it is every 10 seconds. */
const GONE_MS = 25_000

interface Place extends PersonHere { at: number }

/**
 * Who looks at which study, and where in it. Kept in memory only.
 * @example presence.arrive(studyId, { tab: 't1', userId, name: 'Mirela Oakes', runId, rowId: null, field: null })
 */
export function makePresence(clock: () => Date) {
  const studies = new Map<string, Map<string, Place>>()

  function here(studyId: string): Map<string, Place> {
    const places = studies.get(studyId) ?? new Map<string, Place>()
    for (const [tab, place] of places) if (clock().getTime() - place.at > GONE_MS) places.delete(tab)
    return places
  }
  const same = (a: Place | undefined, b: PersonHere) => a !== undefined && a.userId === b.userId && a.runId === b.runId && a.rowId === b.rowId && a.field === b.field

  return {
    /** @returns true when others should be told: somebody came or moved */
    arrive(studyId: string, person: PersonHere): boolean {
      const places = here(studyId)
      const moved = !same(places.get(person.tab), person)
      places.set(person.tab, { ...person, at: clock().getTime() })
      studies.set(studyId, places)
      return moved
    },
    leave(studyId: string, tab: string, userId: string): boolean {
      const places = here(studyId)
      const left = places.get(tab)?.userId === userId && places.delete(tab)
      if (places.size === 0) studies.delete(studyId)
      return left
    },
    /** Everybody else in the study; one's own other tabs are left out. */
    others(studyId: string, userId: string): PersonHere[] {
      return [...here(studyId).values()].filter(place => place.userId !== userId).map(({ at, ...person }) => person)
    },
  }
}
export type Presence = ReturnType<typeof makePresence>
