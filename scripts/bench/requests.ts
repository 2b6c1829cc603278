import type { Clinic } from './clinic'
import { answerTime, getOnce, type Target } from './load'
import { against, ms, type Figure } from './measure'

const FOR_MS = 1_500
const WARM_MS = 700
const ROWS = 50

/** Every list that grows with the years, as the role that opens it sees it first. */
const lists = [
  { what: 'Worklist', path: `/api/referrals?pageSize=${ROWS}`, role: 'administrator' },
  { what: 'Read studies', path: `/api/reading?state=read&pageSize=${ROWS}`, role: 'neurologist' },
  { what: 'Dispatch', path: `/api/dispatch?pageSize=${ROWS}`, role: 'administrator' },
  { what: 'Ledger', path: `/api/ledger?pageSize=${ROWS}`, role: 'administrator' },
] as const

const at = (clinic: Clinic, path: string, role?: keyof Clinic['cookies']): Target => ({ origin: clinic.origin, path, ...(role ? { cookie: clinic.cookies[role] } : {}) })

async function compare(rounds: number, one: Target, other: Target) {
  for (const target of [one, other]) await answerTime(target, WARM_MS)
  return await against(rounds, () => answerTime(one, FOR_MS), () => answerTime(other, FOR_MS))
}

const each = (time: number) => `${ms(time)} (${Math.round(1000 / time).toLocaleString('en')}/s)`

/** What a request costs, against the cheapest that the same server answers. */
export async function requestFigures(clinic: Clinic, rounds: number): Promise<Figure[]> {
  const me = at(clinic, '/api/me', 'administrator')
  const trivial = at(clinic, '/api/health')
  const list = at(clinic, lists[0].path, lists[0].role)
  const who = JSON.parse((await getOnce(me)).toString()) as { id?: string } | null
  if (!who?.id) throw new Error('The session was not taken.')
  await needRows(list)
  const session = await compare(rounds, me, trivial)
  const page = await compare(rounds, list, trivial)
  return [
    { what: 'Session check (/api/me), against a trivial route (/api/health)', value: each(session.one), partner: each(session.other), ratio: session.ratio },
    { what: `Worklist, ${ROWS} rows, against the same trivial route`, value: each(page.one), partner: each(page.other), ratio: page.ratio },
  ]
}

/** @throws when the list is not full: an empty one would be quick */
async function needRows(target: Target): Promise<void> {
  const { rows } = JSON.parse((await getOnce(target)).toString()) as { rows: unknown[] }
  if (rows.length !== ROWS) throw new Error(`${target.path} holds ${rows.length} rows where ${ROWS} were expected.`)
}

export async function listFigures(large: Clinic, small: Clinic, counts: { large: number, small: number }, rounds: number): Promise<Figure[]> {
  const figures: Figure[] = []
  for (const { what, path, role } of lists) {
    const targets = [at(large, path, role), at(small, path, role)] as const
    for (const target of targets) await needRows(target)
    const { one, other, ratio } = await compare(rounds, ...targets)
    figures.push({ what: `${what}, ${ROWS} rows, ${counts.large.toLocaleString('en')} studies against ${counts.small.toLocaleString('en')}`, value: each(one), partner: each(other), ratio })
  }
  return figures
}
