import { randomBytes } from 'node:crypto'
import type { ServiceContext } from './context'

/** After this long without a sign-in a browser counts as unknown again. */
export const DEVICE_DAYS = 90
const DAY_MS = 86_400_000

/** Part of the cookie's name: tells accounts apart on a shared workstation without naming anybody. */
export function deviceMarkName(context: Pick<ServiceContext, 'keys'>, userId: string): string {
  return `device-${context.keys.tokenHash(`device-name:${userId}`).slice(0, 16)}`
}

/** A mark for a browser in which this person has just signed in. It proves nothing else and opens nothing. */
export function makeDeviceMark(context: ServiceContext, userId: string): string {
  const head = `${randomBytes(16).toString('hex')}.${Math.floor(context.clock().getTime() / DAY_MS)}`
  return `${head}.${proof(context, userId, head)}`
}

/** The device's own random name when the mark is ours, for this person and young enough; null otherwise. */
export function readDeviceMark(context: ServiceContext, userId: string, mark: string | undefined): string | null {
  const [name, day, given] = mark?.split('.') ?? []
  if (!name || !day || given !== proof(context, userId, `${name}.${day}`)) return null
  const age = Math.floor(context.clock().getTime() / DAY_MS) - Number(day)
  return age <= DEVICE_DAYS ? name : null
}

function proof(context: Pick<ServiceContext, 'keys'>, userId: string, head: string): string {
  return context.keys.tokenHash(`device:${userId}:${head}`)
}
