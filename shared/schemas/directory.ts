import * as z from 'zod'

export interface PhysicianView { id: string, name: string, title: string, email: string, emailVerified: boolean, practiceId: string, practiceName: string, town: string, deliveryMethod: 'encrypted-pdf' | 'collection-link', passphraseHandedOver: boolean, left: boolean, /** how many others share the name */ namesakes: number }
export const physicianSearchSchema = z.object({ search: z.string().max(120).default(''), page: z.coerce.number().int().min(1).default(1), pageSize: z.coerce.number().int().min(1).max(100).default(20) })
