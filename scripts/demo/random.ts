/** A seeded generator, so that the demonstration is the same each time it is made (mulberry32, public domain, from memory). */
export class Random {
  constructor(private state: number) {}

  next(): number {
    this.state = (this.state + 0x6D2B79F5) | 0
    let t = Math.imul(this.state ^ (this.state >>> 15), 1 | this.state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }

  between(min: number, max: number): number {
    return min + (max - min) * this.next()
  }

  whole(min: number, max: number): number {
    return Math.floor(this.between(min, max + 1))
  }

  pick<T>(list: readonly T[]): T {
    return list[Math.floor(this.next() * list.length)]!
  }

  chance(probability: number): boolean {
    return this.next() < probability
  }

  /** Roughly normal: the sum of twelve uniform numbers. */
  normal(mean: number, sd: number): number {
    let sum = -6
    for (let i = 0; i < 12; i++) sum += this.next()
    return mean + sd * sum
  }
}

/** To so many decimals, as a technologist would type it. */
export const typed = (value: number, decimals: number): number => Number(value.toFixed(decimals))
