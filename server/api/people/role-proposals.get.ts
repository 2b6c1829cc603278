import { listRoleProposals } from '#server/services/role-proposals'
import { defineApiHandler } from '#server/utils/api-handler'

/** Roles that wait for a second person; the service says whom each concerns. */
export default defineApiHandler({
  allow: 'people.read',
  handle: ({ context }) => listRoleProposals(context),
})
