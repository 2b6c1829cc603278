import type { H3Event } from 'h3'
import type { Database } from '#server/database/connection'
import { systemActor, type Log, type ServiceContext, type Settings } from '#server/services/context'
import type { Keys } from '#server/services/keys'
import { actorOf, type OpenSession } from '#server/services/read-session'

declare module 'h3' {
  interface H3EventContext {
    /** Set by 1.session.ts; undefined where it did not look (pages and files). */
    session?: OpenSession | null
    /** Tests hand their services in here. */
    services?: Services
  }
}

/** What the running server holds; opened once by plugins/1.database.ts. */
export interface Services { db: Database, keys: Keys, clock: () => Date, settings: Settings, log: Log }

let ready: Promise<Services> | undefined
let opened: Services | undefined

/** Called once at the start. A server plugin cannot be awaited, so requests wait for this promise instead. */
export function provideServices(opening: Promise<Services>): void {
  ready = opening.then(services => opened = services)
  // Whoever awaits it sees the failure; without this line a failure nobody awaits would end the process silently.
  ready.catch(() => undefined)
}

/** Resolves when the database is open and migrated; for plugins that start later than 1.database.ts. */
export async function servicesReady(): Promise<Services> {
  if (!ready) throw new Error('The database plugin has not run.')
  return await ready
}

/** @throws Error before the database is open */
export function useServices(): Services {
  if (!opened) throw new Error('The database is not open yet.')
  return opened
}

export function servicesOf(event: H3Event): Services {
  return event.context.services ?? useServices()
}

/** The services, acting as the program itself. */
export function systemContext(services: Services = useServices()): ServiceContext {
  return { ...services, actor: systemActor }
}

/** The services, acting as whoever is signed in at this request (the program itself when nobody is). */
export function serverContext(event: H3Event): ServiceContext {
  const user = event.context.session?.user
  return { ...servicesOf(event), actor: user ? actorOf(user) : systemActor }
}
