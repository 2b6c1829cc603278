/** Everything the drawings need to know about colour: one name per role, as in the style sheet of the screen. */
export interface PlotColours {
  sheet: string
  ink: string
  faint: string
  rule: string
  fibre: string
  sheath: string
  beyond: string
  doubt: string
  cold: string
}

/** For paper: the light theme. The thin outline of a shaded part keeps it visible in black and white. */
export const printColours: PlotColours = {
  sheet: '#FFFFFF',
  ink: '#16252B',
  faint: '#55666B',
  rule: '#CBD3D1',
  fibre: '#0F5C63',
  sheath: '#DCEAE8',
  beyond: '#A8321A',
  doubt: '#7A5C0E',
  cold: '#2A629B',
}

/** For the screen: the tokens of the style sheet, which follow the theme. */
export const screenColours: PlotColours = {
  sheet: 'rgb(var(--sheet))',
  ink: 'rgb(var(--ink))',
  faint: 'rgb(var(--faint))',
  rule: 'rgb(var(--rule))',
  fibre: 'rgb(var(--fibre))',
  sheath: 'rgb(var(--sheath))',
  beyond: 'rgb(var(--beyond))',
  doubt: 'rgb(var(--doubt))',
  cold: 'rgb(var(--cold))',
}

/** The same name as in the style sheet and in the PDF, so that one drawing serves both. */
export const plotFont = 'IBM Plex Sans'

/** How a value stands out: `ink` is within limits, which has no colour at all. */
export type Tone = 'ink' | 'faint' | 'beyond' | 'doubt' | 'cold'

/** Two decimals are a fiftieth of a pixel: enough, and the same text on every machine. */
export const px = (value: number): string => String(Math.round(value * 100) / 100)

/** Text that may stand inside SVG. */
export function escapeXml(text: string): string {
  return text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;')
}
