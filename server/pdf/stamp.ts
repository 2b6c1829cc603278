import { px } from '#shared/plots/tokens'
import { ink } from './style'

/** Capitals as strokes on a grid of 4 by 6, y downwards. */
const strokes: Record<string, string> = {
  A: '0,6 2,0 4,6;1,4 3,4', B: '0,0 0,6 3,6 4,5 4,4 3,3 0,3;3,3 4,2 4,1 3,0 0,0', C: '4,1 3,0 1,0 0,1 0,5 1,6 3,6 4,5', D: '0,0 0,6 2,6 4,4 4,2 2,0 0,0',
  E: '4,0 0,0 0,6 4,6;0,3 3,3', F: '4,0 0,0 0,6;0,3 3,3', G: '4,1 3,0 1,0 0,1 0,5 1,6 3,6 4,5 4,3 2,3', H: '0,0 0,6;4,0 4,6;0,3 4,3', I: '2,0 2,6', J: '4,0 4,5 3,6 1,6 0,5',
  K: '0,0 0,6;4,0 0,3 4,6', L: '0,0 0,6 4,6', M: '0,6 0,0 2,3 4,0 4,6', N: '0,6 0,0 4,6 4,0', O: '1,0 3,0 4,1 4,5 3,6 1,6 0,5 0,1 1,0', P: '0,6 0,0 3,0 4,1 4,2 3,3 0,3',
  Q: '1,0 3,0 4,1 4,5 3,6 1,6 0,5 0,1 1,0;2,4 4,6', R: '0,6 0,0 3,0 4,1 4,2 3,3 0,3;2,3 4,6', S: '4,1 3,0 1,0 0,1 0,2 1,3 3,3 4,4 4,5 3,6 1,6 0,5', T: '0,0 4,0;2,0 2,6', U: '0,0 0,5 1,6 3,6 4,5 4,0',
  V: '0,0 2,6 4,0', W: '0,0 1,6 2,3 3,6 4,0', X: '0,0 4,6;4,0 0,6', Y: '0,0 2,3 4,0;2,3 2,6', Z: '0,0 4,0 0,6 4,6',
  Ä: '0,6 2,0 4,6;1,4 3,4;0.6,-1.2 0.6,-1;3.4,-1.2 3.4,-1', Ö: '1,0 3,0 4,1 4,5 3,6 1,6 0,5 0,1 1,0;1,-1.2 1,-1;3,-1.2 3,-1', Ü: '0,0 0,5 1,6 3,6 4,5 4,0;1,-1.2 1,-1;3,-1.2 3,-1',
}
const advance = 6

function pathOf(text: string): string {
  return [...text].flatMap((letter, index) => (strokes[letter] ?? '').split(';').filter(Boolean)
    .map(line => line.split(' ').map((point, at) => `${at === 0 ? 'M' : 'L'}${point.split(',').map((value, axis) => Number(value) + (axis === 0 ? index * advance : 0)).join(' ')}`).join(''))).join('')
}

/**
 * A word across the whole page, behind everything, drawn and not written: as text its letters would be strewn among the
 * lines of whoever copies or searches the page. The words themselves stand in the footer of every page.
 */
export function stampSvg(text: string, { width, height }: { width: number, height: number }): string {
  const units = text.length * advance - 2
  const diagonal = Math.hypot(width, height) * 0.86
  const scale = diagonal / units
  const angle = -Math.atan2(height, width) * 180 / Math.PI
  const move = `translate(${px(width / 2)} ${px(height / 2)}) rotate(${px(angle)}) scale(${px(scale)}) translate(${-units / 2} -3)`
  return `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}" viewBox="0 0 ${width} ${height}"><path d="${pathOf(text)}" transform="${move}" fill="none" stroke="${ink.ink}" stroke-opacity="0.08" stroke-width="1" stroke-linecap="round" stroke-linejoin="round"/></svg>`
}
