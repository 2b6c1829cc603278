import { figureOf, type Figure, type IndicatorCase, type IndicatorKind } from '#shared/indicators'

/**
 * The figure of each group of cases, the largest group first; cases without that group are left out.
 * @example breakdown('share', cases, 'lead') // => [{ words: 'up to 1 week', figure: { cases: 12, counted: 1, … } }, …]
 */
export function breakdown(kind: IndicatorKind, cases: readonly IndicatorCase[], key: string): { words: string, figure: Figure }[] {
  return [...grouped(cases, key)].flatMap(([words, mine]) => words === undefined ? [] : [{ words, figure: figureOf(kind, mine) }]).sort((a, b) => b.figure.cases - a.figure.cases || a.words.localeCompare(b.words))
}

function grouped(cases: readonly IndicatorCase[], key: string): Map<string | undefined, IndicatorCase[]> {
  const groups = new Map<string | undefined, IndicatorCase[]>()
  for (const one of cases) groups.set(one.groups[key], [...groups.get(one.groups[key]) ?? [], one])
  return groups
}
