import { viewDeskForm } from '#server/services/desk-drafts'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({ allow: 'desk.refer', handle: ({ context }) => viewDeskForm(context) })
