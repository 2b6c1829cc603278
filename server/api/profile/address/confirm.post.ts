import { confirmOwnAddress } from '#server/services/confirm-own-address'
import { ownAddressCodeSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  body: ownAddressCodeSchema,
  handle: ({ event, context, user, body }) => confirmOwnAddress(context, { userId: user.id, code: body.code, sessionHash: event.context.session!.idHash }),
})
