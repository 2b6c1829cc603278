import { quantities } from '../catalogue/quantities'
import type { AppliedLimit, Result } from '../calculations/types'
import { px, type PlotColours, type Tone } from './tokens'
import { limitsOf, toneOf, verdictWords } from './verdict-words'

export interface LimitBarGeometry {
  width: number
  height: number
  /** The allowed part, shaded. */
  allowed: { x: number, width: number }
  /** One tick per limit. */
  ticks: number[]
  /** From value minus to value plus its expanded uncertainty; null without one. */
  whisker: { from: number, to: number } | null
  /** Null for an absent response: there is nothing to place. */
  mark: { x: number, /** the value lies off the scale and is drawn as an arrow at its end */ beyondScale: 'left' | 'right' | null } | null
  tone: Tone
}

export interface LimitBarOptions {
  width: number
  /** Low values right: for the column of the other side, so that outside points the same way on both. */
  mirrored?: boolean
}

export const limitBarHeight = 14

/** A scale in its own units; `at` gives 0 to 1, and less or more for what lies off it. */
interface Scale { at: (value: number) => number }

const linear = (from: number, to: number): Scale => ({ at: value => (value - from) / (to - from) })
const logarithmic = (from: number, to: number): Scale => ({ at: value => value <= 0 ? -1 : Math.log(value / from) / Math.log(to / from) })

const isAmplitude = (quantity: string) => quantity in quantities && ['amplitude', 'area'].includes(quantities[quantity as keyof typeof quantities].kind)
const isChange = (quantity: string) => /Difference|Drop|Fall|Rise|Percent/.test(quantity)

/**
 * The scale, chosen so that the limit always lies visibly inside: near the middle.
 * Amplitudes spread over decades, so theirs is logarithmic; differences start below zero, as they may change sign.
 */
function scaleOf(quantity: string, limits: AppliedLimit[]): Scale {
  const values = limits.map(limit => limit.value)
  const low = Math.min(...values)
  const high = Math.max(...values)
  if (isAmplitude(quantity) && low > 0) return logarithmic(low / 6, high * 8)
  if (high > low) return linear(low - (high - low) * 0.6, high + (high - low) * 0.6)
  if (isChange(quantity) || low <= 0) return linear(low - 1.5 * (Math.abs(low) || 1), low + 1.5 * (Math.abs(low) || 1))
  return linear(0.45 * low, 1.6 * low)
}

/** What the limits allow, from 0 to 1. */
function allowedPart(limits: AppliedLimit[], scale: Scale): [number, number] {
  const lower = limits.find(limit => limit.bound === 'lower')
  const upper = limits.find(limit => limit.bound === 'upper')
  return [lower ? scale.at(lower.value) : 0, upper ? scale.at(upper.value) : 1]
}

/** Logarithms differ in the last digit between engines: the page drawn by the server has to be the one the browser draws. */
const hundredths = (pixels: number) => Math.round(pixels * 100) / 100
const clamp = (share: number) => Math.min(1, Math.max(0, share))
/** Half a mark's width stays free at both ends. */
const inset = 3

function placeMark(share: number, place: (share: number) => number, mirrored: boolean): LimitBarGeometry['mark'] {
  if (share >= 0 && share <= 1) return { x: place(share), beyondScale: null }
  return { x: place(clamp(share)), beyondScale: (share < 0) !== mirrored ? 'left' : 'right' }
}

/**
 * Where a value lies relative to its limits, in pixels. Null when it was not judged: then there is no bar.
 *
 * @example limitBarGeometry(result, { width: 92 })?.ticks // => [ 44.2 ]
 */
export function limitBarGeometry(result: Result, { width, mirrored = false }: LimitBarOptions): LimitBarGeometry | null {
  const limits = limitsOf(result.verdict)
  if (limits.length === 0) return null
  const scale = scaleOf(result.quantity, limits)
  const place = (share: number) => hundredths(inset + (mirrored ? 1 - share : share) * (width - 2 * inset))
  const [from, to] = allowedPart(limits, scale).map(place).sort((a, b) => a - b) as [number, number]
  const value = result.value.kind === 'value' ? result.value : null
  const spread = value?.uncertainty
    ? [value.value - value.uncertainty, value.value + value.uncertainty].map(v => place(clamp(scale.at(v)))).sort((a, b) => a - b) as [number, number]
    : null
  return {
    width,
    height: limitBarHeight,
    allowed: { x: from, width: hundredths(to - from) },
    ticks: limits.map(limit => place(scale.at(limit.value))),
    whisker: spread && spread[1] > spread[0] ? { from: spread[0], to: spread[1] } : null,
    mark: value ? placeMark(scale.at(value.value), place, mirrored) : null,
    tone: toneOf(result),
  }
}

/** The mark as a path: an upright bar, or an arrow at the end of the scale. */
export function markPath(mark: NonNullable<LimitBarGeometry['mark']>): string {
  if (!mark.beyondScale) return `M${px(mark.x - 1.5)} 1.5h3v11h-3z`
  const tip = mark.beyondScale === 'left' ? -3 : 3
  return `M${px(mark.x + tip)} 7L${px(mark.x - tip)} 2V12Z`
}

/**
 * The bar as SVG text with given colours, for paper. '' when there is none.
 *
 * @example limitBarSvg(result, { width: 92, colours: printColours })
 */
export function limitBarSvg(result: Result, { colours, ...options }: LimitBarOptions & { colours: PlotColours }): string {
  const bar = limitBarGeometry(result, options)
  if (!bar) return ''
  const tone = colours[bar.tone]
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${bar.width}" height="${bar.height}" viewBox="0 0 ${bar.width} ${bar.height}">`,
    `<line x1="0" x2="${bar.width}" y1="7" y2="7" stroke="${colours.rule}" stroke-width="1"/>`,
    `<rect x="${px(bar.allowed.x)}" y="4" width="${px(bar.allowed.width)}" height="6" fill="${colours.sheath}" stroke="${colours.faint}" stroke-width="0.5"/>`,
    ...bar.ticks.map(x => `<line x1="${px(x)}" x2="${px(x)}" y1="1.5" y2="12.5" stroke="${colours.faint}" stroke-width="1"/>`),
    bar.whisker ? `<line x1="${px(bar.whisker.from)}" x2="${px(bar.whisker.to)}" y1="7" y2="7" stroke="${tone}" stroke-width="1.5"/>` : '',
    bar.mark ? `<path d="${markPath(bar.mark)}" fill="${tone}"/>` : '',
    '</svg>',
  ].join('')
}

/** The same in words. */
export const limitBarText = verdictWords
