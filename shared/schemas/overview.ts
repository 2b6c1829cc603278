import * as z from 'zod'
import { indicatorIds, type Figure, type IndicatorCase, type IndicatorId } from '../indicators'
import { idSchema } from './common'

/** A month of the calendar: 2026-03. */
export const monthSchema = z.string().regex(/^\d{4}-(0[1-9]|1[0-2])$/, 'Enter the month as year-month, for example 2026-03.')
export const indicatorSchema = z.enum(indicatorIds)
export const overviewQuerySchema = z.object({ until: monthSchema.optional() })
export const casesQuerySchema = z.object({ month: monthSchema, siteId: idSchema })

/** GET /api/overview: every figure by site and month, oldest month first. */
export interface OverviewView {
  months: string[]
  sites: { id: string, name: string }[]
  /** Indicator, then site, then one figure per month. */
  figures: Record<IndicatorId, Record<string, Figure[]>>
}
/** GET /api/overview/:indicator: the cases that make one figure, newest first. */
export interface OverviewCases { siteName: string, figure: Figure, /** the twelve months up to this one */ months: { month: string, figure: Figure }[], cases: (IndicatorCase & { link: string })[] }
