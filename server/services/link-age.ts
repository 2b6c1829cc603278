import { collectionDays } from '#server/email/templates/report-ready'
import type { ServiceContext } from './context'

const DAY_MS = 86_400_000
export interface LinkDates { sentAt: string | null, createdAt: string, linkRenewedAt: string | null }

/** A collection link works for 30 days from its last sending or renewal, whichever was later: a report can be sent again long after a renewal. */
export function linkUntil({ sentAt, createdAt, linkRenewedAt }: LinkDates): string {
  return new Date(Math.max(Date.parse(sentAt ?? createdAt), Date.parse(linkRenewedAt ?? createdAt)) + collectionDays * DAY_MS).toISOString()
}

export function linkExpired(context: Pick<ServiceContext, 'clock'>, dates: LinkDates): boolean {
  return context.clock().getTime() > Date.parse(linkUntil(dates))
}
