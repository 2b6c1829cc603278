/**
 * Who may do what. One table: action by role. Roles are held per site; the server asks for the action at the
 * site the thing belongs to, at every request. tests/server/permissions.test.ts walks every cell.
 */
export const roles = ['technologist', 'neurologist', 'administrator', 'medical-director', 'referring-physician'] as const
export type Role = (typeof roles)[number]
export const roleLabels: Record<Role, string> = {
  'technologist': 'technologist', 'neurologist': 'neurologist', 'administrator': 'administrator', 'medical-director': 'medical director', 'referring-physician': 'referring physician',
}

const T: Role = 'technologist'
const N: Role = 'neurologist'
const A: Role = 'administrator'
const D: Role = 'medical-director'
const R: Role = 'referring-physician'

export const permissions = {
  // Patients belong to the organisation: the register is searched across sites.
  'patient.search': [T, N, A, D],
  'patient.read': [T, N, A, D],
  'patient.write': [T, A],
  'patient.merge': [A],

  'referral.read': [T, N, A, D],
  'referral.write': [T, A],
  'referral.triage': [N, A, D],
  'referral.book': [A],
  'referral.import': [A],
  'referral.walk-in': [T],
  'upload.read': [T, N, A, D],
  'upload.write': [T, N, A],

  // Measured values: those who record, read or answer for them.
  'study.read': [T, N, D],
  'study.record': [T, N],
  'study.hand-over': [T, N],
  'study.return': [N],
  // Who reads what: readers and the director share out what waits.
  'study.assign': [N, D],
  // While the patient is on the couch: the bench asks, a reader answers.
  'question.ask': [T, N],
  'question.answer': [N],

  'report.read': [T, N, A, D],
  'report.write': [N],
  'report.sign': [N],
  'report.correct': [N],

  'delivery.read': [N, A, D],
  'delivery.manage': [A],
  'directory.read': [T, N, A, D],
  'directory.write': [A],

  'shelf.read': [T, N, A, D],
  'shelf.propose': [N, A, D],
  'shelf.approve': [D],

  'people.read': [A, D],
  'people.write': [A],
  'site.read': [T, N, A, D],
  'site.write': [A],
  'audit.read': [A, D],
  'overview.read': [A, D],
  'retention.manage': [A, D],
  // Handing a report, or who saw the record, to the patient it is about.
  'report.copy': [N, A, D],
  'task.read': [T, N, A, D],
  // "Something changed", in ids and kinds; each kind asks for an action of its own besides.
  'changes.hear': [T, N, A, D],

  // The desk of a referring physician: own referrals and final reports of own patients only.
  'desk.read': [R],
  // Refers a new patient, without a look at the register, and completes what an own referral misses.
  'desk.refer': [R],
} as const satisfies Record<string, readonly Role[]>

export type Action = keyof typeof permissions

/** What a person in training leaves to a supervisor: they read and write, someone else signs. */
export const supervisedActions: readonly Action[] = ['report.sign', 'report.correct', 'shelf.approve']

/** What a neurologist may do with one study of a site where they hold no role, for a stated reason and for some hours. */
export const emergencyActions: readonly Action[] = ['study.read', 'referral.read', 'upload.read', 'report.read', 'report.write', 'report.sign', 'study.return']

/**
 * @param inTraining of the person, whatever the role
 * @example roleMay('technologist', 'report.sign') // => false
 * @example roleMay('neurologist', 'report.sign', true) // => false
 */
export function roleMay(role: Role, action: Action, inTraining = false): boolean {
  return (permissions[action] as readonly Role[]).includes(role) && !(inTraining && supervisedActions.includes(action))
}

/** The rooms of the bar, in order, each with the action that opens it. */
export const rooms = [
  { id: 'intake', label: 'Intake', path: '/intake', action: 'referral.triage' },
  { id: 'bench', label: 'Bench', path: '/bench', action: 'study.record' },
  { id: 'reading', label: 'Reading', path: '/reading', action: 'report.write' },
  { id: 'dispatch', label: 'Dispatch', path: '/dispatch', action: 'delivery.read' },
  { id: 'shelf', label: 'Shelf', path: '/shelf', action: 'shelf.read' },
  { id: 'directory', label: 'Directory', path: '/directory', action: 'directory.write' },
  { id: 'people', label: 'People', path: '/people', action: 'people.read' },
  { id: 'overview', label: 'Overview', path: '/overview', action: 'overview.read' },
  { id: 'ledger', label: 'Ledger', path: '/ledger', action: 'audit.read' },
  { id: 'desk', label: 'Desk', path: '/desk', action: 'desk.read' },
] as const satisfies readonly { id: string, label: string, path: string, action: Action }[]

/** Roles whose holders can be the second of two people: a new one needs the consent of somebody who holds one. */
export const rolesThatApprove: readonly Role[] = [A, D]

/** Roles whose holders sign or approve: they have the second factor from their first sign-in on. */
export const rolesWithSecondFactor: readonly Role[] = [N, D]
