import type { Run, RunRow, Study } from '#shared/schemas/study'
import type { Remark } from '#shared/calculations/types'
import { assess, run, studyWith } from '../study-maker'

type Values = RunRow['values']
export type Row = [site: string, values: Values, series?: RunRow['series']]

/** Runs with the short ids r (right) and l (left), so that a case fits on a line; rows are r-0, r-1, … */
export const right = (technique: string, rows: Row[], changes: Partial<Run> = {}): Run => run(technique, 'right', rows, { id: 'r', ...changes })
export const left = (technique: string, rows: Row[], changes: Partial<Run> = {}): Run => run(technique, 'left', rows, { id: 'l', ...changes })

/** "check unusual/r/r-0/latencyMs: Latency at wrist is …": a remark with its strength, where it stands and its words. */
export const line = ({ strength, key, sentence }: Remark): string => `${strength} ${key}: ${sentence}`

/** Every remark on these runs whose code is one of these, each as a line. */
export function asked(codes: readonly string[], runs: readonly Run[], changes: Partial<Study> = {}): string[] {
  return assess(studyWith([...runs], changes)).remarks.filter(remark => codes.includes(remark.code.split('/')[0] as string)).map(line)
}
