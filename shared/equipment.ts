import { formatDay } from './report/dates'

/** What a laboratory keeps a date for. */
export const equipmentKinds = ['amplifier', 'stimulator', 'thermometer', 'tape', 'warming', 'other'] as const
export type EquipmentKind = (typeof equipmentKinds)[number]
export const equipmentKindLabels: Record<EquipmentKind, string> = {
  amplifier: 'Recording machine', stimulator: 'Stimulator', thermometer: 'Skin thermometer', tape: 'Tape or calliper', warming: 'Warming device', other: 'Other',
}

export interface EquipmentView { id: string, siteId: string, name: string, serial: string, kind: EquipmentKind, calibrationDue: string | null, safetyDue: string | null, retired: boolean, revision: number }

/**
 * What is overdue on a day, as sentences: said as a banner, never a reason to refuse recording (common practice). A date
 * that was not entered is not overdue.
 *
 * @example
 * overdueSentences({ name: 'Machine 2', serial: 'A14', calibrationDue: '2026-03-01', safetyDue: null }, '2026-03-09')
 * // => ['Machine 2 (A14): calibration was due on 1 March 2026.']
 */
export function overdueSentences({ name, serial, calibrationDue, safetyDue }: Pick<EquipmentView, 'name' | 'serial' | 'calibrationDue' | 'safetyDue'>, day: string): string[] {
  const which = serial ? `${name} (${serial})` : name
  const due = [['calibration', calibrationDue], ['the electrical-safety check', safetyDue]] as const
  return due.flatMap(([what, on]) => on && on < day ? [`${which}: ${what} was due on ${formatDay(on)}.`] : [])
}
