import * as z from 'zod'

export const viewRooms = ['intake'] as const
/** A list as somebody wants to find it again: the query part of its address, so that a link shows it to anybody who may. */
export const listViewSchema = z.object({
  room: z.enum(viewRooms),
  name: z.string().trim().min(1, 'Enter a name for this view.').max(60),
  query: z.string().max(500).regex(/^[\w=&%.,+-]*$/, 'This view has an address that cannot be kept.'),
})
export type ListViewInput = z.output<typeof listViewSchema>
export interface ListViewRow { id: string, name: string, query: string }
