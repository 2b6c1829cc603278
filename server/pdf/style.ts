import { printColours } from '#shared/plots/tokens'

/** Sizes in points, colours of the light theme: they keep their order in black and white. */
export const ink = printColours
export const fontFamily = 'IBM Plex Sans'
export const size = { body: 9.5, lead: 11, small: 8.25, table: 8.5, wideTable: 8, heading: 10.5, footer: 7.75 }
/**
 * How close things stand. A report is drawn usual first, and close where that spares a page that would hold little.
 * `cell` is above and below a row, `heading` above one, both in points; `plotHeight` in units of the drawing.
 */
export interface Spacing { lineHeight: number, cell: number, heading: number, paragraph: number, plotHeight: number, small: number }
export const usual: Spacing = { lineHeight: 1.12, cell: 1.6, heading: 7, paragraph: 2, plotHeight: 164, small: size.small }
export const close: Spacing = { lineHeight: 1.02, cell: 0.8, heading: 5, paragraph: 1, plotHeight: 138, small: 7.5 }

export const margins = { left: 42, right: 42, top: 56, bottom: 48 }
export const pageWidths = { A4: 595.28, LETTER: 612 } as const
export const pageHeights = { A4: 841.89, LETTER: 792 } as const
/** Room between the margins. */
export const lineWidth = (paper: keyof typeof pageWidths): number => pageWidths[paper] - margins.left - margins.right
