/**
 * Body mass index from height and weight, at one decimal: the precision at which limits compare it.
 *
 * bmi (kg/m²) = weight (kg) / height (m)². Source: the definition of the index (Quetelet); one decimal is this project's rule.
 * Null when either is missing or not above zero.
 *
 * @example
 * bodyMassIndex({ heightCm: 162, weightKg: 74 }) // => 28.2
 */
export function bodyMassIndex(size: { heightCm: number | null, weightKg: number | null }): number | null {
  const { heightCm, weightKg } = size
  if (heightCm === null || weightKg === null || heightCm <= 0 || weightKg <= 0) return null
  const index = weightKg / (heightCm / 100) ** 2
  return oneDecimal(index)
}

/** Half up at one decimal; the small addition lifts a half that binary arithmetic holds a hair too low (23.95). */
export function oneDecimal(value: number): number {
  return Math.floor(value * 10 + 0.5 + 1e-9) / 10
}
