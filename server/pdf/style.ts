import { printColours } from '#shared/plots/tokens'

/** Sizes in points, colours of the light theme: they keep their order in black and white. */
export const ink = printColours
export const fontFamily = 'IBM Plex Sans'
export const size = { body: 9.5, lead: 11, small: 8.25, table: 8.5, wideTable: 8, heading: 10.5, footer: 7.75 }
export const margins = { left: 42, right: 42, top: 56, bottom: 48 }
export const pageWidths = { A4: 595.28, LETTER: 612 } as const
export const pageHeights = { A4: 841.89, LETTER: 792 } as const
/** Room between the margins. */
export const lineWidth = (paper: keyof typeof pageWidths): number => pageWidths[paper] - margins.left - margins.right
