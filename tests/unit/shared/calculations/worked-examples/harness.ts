import { STUDY_FORMAT, studySchema, type Run, type RunRow, type Study } from '#shared/schemas/study'
import examples from '../../../../fixtures/worked-examples.json'

/**
 * The worked examples of tests/fixtures/worked-examples.json. Each entry has its source, whether its numbers were read
 * there or recalled (`basis`), and whether they are published or invented for a published rule (`kind`).
 * A check is a function from the entry to nothing, registered under the entry's id.
 */
export interface Example {
  id: string
  kind: 'published-patient' | 'published-group' | 'published-threshold' | 'rule-vector'
  condition: string
  source: { citation: string }
  basis: 'read' | 'derived' | 'memory'
  inputs: Record<string, unknown>
  expected: Record<string, unknown>
  notes: string
}
export const allExamples = examples.examples as unknown as Example[]

/** What the numbers of an entry rest on, in words. */
export function restsOn({ kind, basis }: Example): string {
  if (kind === 'rule-vector') return 'invented numbers for a published rule'
  return basis === 'read' ? 'published numbers, read' : 'numbers from memory'
}

/** Typed access to an entry's inputs. */
export function inputs<T>(example: Example): T {
  return example.inputs as T
}
export function expected<T>(example: Example): T {
  return example.expected as T
}

/** A study of an invented date with these runs, warm everywhere, as the schema reads it. */
export function studyOf(runs: Run[], patient: Partial<Study['patient']> = {}): Study {
  return studySchema.parse({
    format: STUDY_FORMAT, id: 'worked-example', studyDate: '2026-12-02', patient: { birthDate: '1963-01-01', sexForLimits: 'male', ...patient }, runs,
    temperatures: (['hand', 'foot'] as const).flatMap(segment => (['right', 'left'] as const).map(side => ({ id: `${segment}-${side}`, segment, side, celsius: 33 }))),
  })
}

export function motorRun(id: string, technique: string, side: 'right' | 'left', rows: [site: string, values: RunRow['values']][]): Run {
  return { id, technique, side, rows: rows.map(([site, values], index) => ({ id: `${id}-${index}`, site, values })) }
}
