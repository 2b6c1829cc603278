export interface Figure {
  what: string
  /** What was measured and what it is measured against, each with its unit. */
  value: string
  partner: string
  ratio: number | null
  /** The wished-for ratio, where there is one; said beside the figure, never a failure. */
  goal?: number
}

export function median(values: readonly number[]): number {
  const sorted = values.toSorted((a, b) => a - b)
  const middle = sorted.length >> 1
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2
}

/** @param share 0.99 for the value that 99 of 100 stay at or below (nearest rank) */
export function percentile(values: readonly number[], share: number): number {
  const sorted = values.toSorted((a, b) => a - b)
  return sorted[Math.max(0, Math.ceil(share * sorted.length) - 1)] ?? Number.NaN
}

/**
 * Two things measured in turn, round after round, so that a busy moment of the machine meets both.
 * @returns the median of each, and the median of the rounds' own ratios
 */
export async function against(rounds: number, one: () => Promise<number> | number, other: () => Promise<number> | number): Promise<{ one: number, other: number, ratio: number }> {
  const pairs: [number, number][] = []
  for (let round = 0; round < rounds; round++) {
    if (round % 2 === 0) pairs.push([await one(), await other()])
    else {
      const second = await other()
      pairs.push([await one(), second])
    }
  }
  return { one: median(pairs.map(pair => pair[0])), other: median(pairs.map(pair => pair[1])), ratio: median(pairs.map(([a, b]) => a / b)) }
}

/** Processor time of this program so far, in ms. */
export function usedMs(): number {
  const { user, system } = process.cpuUsage()
  return (user + system) / 1000
}

/** Milliseconds of processor time for one call, from as many calls as fit into so much of it: what others do on this machine counts less. */
export function timeOf(act: (turn: number) => unknown, forMs: number): number {
  const from = usedMs()
  let turns = 0
  do act(turns++)
  while (usedMs() - from < forMs)
  return (usedMs() - from) / turns
}

const digits = (value: number) => value >= 100 ? 0 : value >= 10 ? 1 : value >= 1 ? 2 : 3
export const ms = (value: number): string => `${value.toFixed(digits(value))} ms`

/** A goal is a most: the ratio says how many times as long it took. */
export function printFigures(title: string, figures: readonly Figure[]): void {
  const cells = figures.map(({ what, value, partner, ratio, goal }) => [what, value, partner, ratio === null ? '' : `${ratio.toFixed(2)} x`, goal === undefined || ratio === null ? '' : `at most ${goal} x: ${ratio <= goal ? 'met' : 'missed'}`])
  const lines = [['', 'measured', 'against', 'ratio', 'goal'], ...cells]
  const widths = lines[0]!.map((_, column) => Math.max(...lines.map(line => line[column]!.length)))
  console.log(`\n${title}`)
  for (const line of lines) console.log(`  ${line.map((cell, column) => cell.padEnd(widths[column]!)).join('   ').trimEnd()}`)
}
