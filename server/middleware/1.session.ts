import { defineEventHandler } from 'h3'
import { guardRequest } from '#server/utils/guard-request'
import { servicesReady } from '#server/utils/services'

/** Closed by default. Waits for the migrations, since a server plugin cannot be awaited. */
export default defineEventHandler(async (event) => {
  await servicesReady()
  return await guardRequest(event)
})
