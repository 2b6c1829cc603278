import type { H3Event } from 'h3'
import { makeChangeHub, type ChangeHub } from '#server/services/change-hub'
import { makePresence, type Presence } from '#server/services/presence'
import { servicesOf, type Services } from './services'

const hubs = new WeakMap<Services, ChangeHub>()
const rooms = new WeakMap<Services, Presence>()

/** The one hub of a running server. */
export function hubOf(services: Services): ChangeHub {
  const hub = hubs.get(services) ?? makeChangeHub(services)
  hubs.set(services, hub)
  return hub
}

/** Who is in which study; in memory, since it is true only as long as the server runs. */
export function presenceOf(event: H3Event): Presence {
  const services = servicesOf(event)
  const presence = rooms.get(services) ?? makePresence(services.clock)
  rooms.set(services, presence)
  return presence
}
