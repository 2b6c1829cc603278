import { indicatorCases } from '#server/database/queries/indicators/index'
import type { Database } from '#server/database/connection'
import { figureOf, indicatorIds, indicators, type Figure, type IndicatorCase, type IndicatorId } from '#shared/indicators'
import type { OverviewCases, OverviewView } from '#shared/schemas/overview'
import { localDate } from '../site-time'

interface Asked { siteIds: readonly string[], now: string }
interface SiteZone { id: string, name: string, timeZone: string }

const monthsShown = 12

/** @example monthsUntil('2026-02', 3) // => ['2025-12', '2026-01', '2026-02'] */
export function monthsUntil(last: string, count: number): string[] {
  const [year, month] = last.split('-').map(Number) as [number, number]
  return Array.from({ length: count }, (_, index) => new Date(Date.UTC(year, month - count + index, 1)).toISOString().slice(0, 7))
}

/** A day wider on both sides than the months: which month a case belongs to is asked of its site's calendar. */
function spanOf(months: readonly string[], siteIds: readonly string[]) {
  const from = new Date(Date.parse(`${months[0]}-01T00:00:00Z`) - 86_400_000).toISOString()
  const [year, month] = (months.at(-1) ?? '').split('-').map(Number) as [number, number]
  return { siteIds, from, until: new Date(Date.UTC(year, month, 2)).toISOString() }
}

async function sitesOf(db: Database, siteIds: readonly string[]): Promise<SiteZone[]> {
  return await db.selectFrom('site').select(['id', 'name', 'timeZone']).where('id', 'in', siteIds).orderBy('name').execute()
}

const monthAt = (zone: string) => (at: string) => localDate(new Date(at), zone).slice(0, 7)

function figuresBySite(kind: (typeof indicators)[IndicatorId]['kind'], cases: readonly IndicatorCase[], sites: readonly SiteZone[], months: readonly string[]): Record<string, Figure[]> {
  const groups = new Map<string, IndicatorCase[]>()
  const zoneOf = new Map(sites.map(site => [site.id, site.timeZone]))
  for (const one of cases) {
    const key = `${one.siteId} ${monthAt(zoneOf.get(one.siteId) ?? 'UTC')(one.at)}`
    groups.set(key, [...groups.get(key) ?? [], one])
  }
  return Object.fromEntries(sites.map(({ id, timeZone }) => [id, months.map(month => figureOf(kind, groups.get(`${id} ${month}`) ?? [], at => localDate(new Date(at), timeZone)))]))
}

/** Every indicator for the last twelve months by site. */
export async function overview(db: Database, { siteIds, now, until }: Asked & { until?: string | undefined }): Promise<OverviewView> {
  const sites = await sitesOf(db, siteIds)
  const last = until ?? localDate(new Date(now), sites[0]?.timeZone ?? 'UTC').slice(0, 7)
  const months = monthsUntil(last, monthsShown)
  const entries = []
  for (const id of indicatorIds) entries.push([id, figuresBySite(indicators[id].kind, await indicatorCases[id](db, spanOf(months, siteIds), now), sites, months)] as const)
  return { months, sites: sites.map(({ id, name }) => ({ id, name })), figures: Object.fromEntries(entries) as OverviewView['figures'] }
}

const linkOf: Record<IndicatorCase['subject'], (id: string) => string> = { referral: id => `/intake/${id}`, study: id => `/reading/${id}`, report: id => `/reports/${id}` }

/** The cases behind one figure, and the same figure of the months before it. */
export async function overviewCases(db: Database, { indicator, month, siteId, now }: { indicator: IndicatorId, month: string, siteId: string, now: string }): Promise<OverviewCases> {
  const sites = await sitesOf(db, [siteId])
  const zone = sites[0]?.timeZone ?? 'UTC'
  const months = monthsUntil(month, monthsShown)
  const found = await indicatorCases[indicator](db, spanOf(months, [siteId]), now)
  const figures = figuresBySite(indicators[indicator].kind, found, sites, months)[siteId] ?? []
  const cases = found.filter(one => monthAt(zone)(one.at) === month).sort((a, b) => b.at.localeCompare(a.at))
  return {
    siteName: sites[0]?.name ?? '', figure: figures.at(-1) ?? figureOf(indicators[indicator].kind, []),
    months: months.map((each, index) => ({ month: each, figure: figures[index]! })), cases: cases.map(one => ({ ...one, link: linkOf[one.subject](one.subjectId) })),
  }
}
