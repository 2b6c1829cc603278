import Sqlite from 'better-sqlite3'
import { beforeAll, describe, expect, it } from 'vitest'
import { recordAuditEvent } from '#server/services/record-audit-event'
import { flushViews, recordView } from '#server/services/record-view'
import { verifyAudit } from '#server/services/verify-audit'
import { testContext } from './helpers'

const LINKS = 12

/** A fresh database with a dozen acts and a dozen views, and a hand that can do what triggers forbid. */
async function filled() {
  const t = await testContext()
  const user = await t.makeUser()
  const context = t.as(user)
  for (let n = 0; n < LINKS; n++) {
    await t.db.transaction().execute(trx => recordAuditEvent(context, trx, { name: 'role.granted', subject: 'user', subjectId: `u${n}`, data: { role: 'technologist' } }))
    recordView(context, { subject: 'study', subjectId: `s${n}`, patientId: 'p' })
  }
  await flushViews(context)
  const tamper = (...statements: string[]) => {
    const sqlite = new Sqlite(t.file)
    for (const name of ['audit_event_no_update', 'audit_event_no_delete', 'view_event_no_update', 'view_event_no_delete']) sqlite.exec(`drop trigger ${name}`)
    for (const statement of statements) sqlite.exec(statement)
    sqlite.close()
  }
  return { ...t, context, tamper, verify: () => verifyAudit(context) }
}

describe('the chains', () => {
  it('are intact when nobody touched them, and stay so after the check itself is written', async () => {
    const { verify } = await filled()
    expect(await verify()).toMatchObject({ acts: { links: LINKS, intact: true, problems: [] }, views: { links: LINKS, intact: true, problems: [] } })
    expect(await verify()).toMatchObject({ acts: { links: LINKS + 1, intact: true } })
  })

  it.each([
    ['a changed name', `update {table} set {text} = 'x' where seq = 5`, /Number 5 was changed/],
    ['a changed time', `update {table} set at = '2020-01-01T00:00:00.000Z' where seq = 5`, /Number 5 was changed/],
    ['a changed actor', `update {table} set actor_id = 'someone' where seq = 5`, /Number 5 was changed/],
    ['a removed link', `delete from {table} where seq = 5`, /missing between number 4 and number 6/],
    ['a removed link, renumbered', `delete from {table} where seq = 5; update {table} set seq = seq - 1 where seq > 5`, /Number 5 does not follow/],
    ['a removed end', `delete from {table} where seq > 10`, /links up to number 12 should exist/],
    ['an emptied chain', `delete from {table}`, /links up to number 12 should exist/],
    ['two links exchanged', `update {table} set seq = 100 where seq = 5; update {table} set seq = 5 where seq = 6; update {table} set seq = 6 where seq = 100`, /Number 5 does not follow/],
    ['the proof of the end removed', `delete from {table} where seq > 10; delete from meta where key = '{head}'`, /proof of the last link is missing/],
  ])('%s shows', async (_name, statement, problem) => {
    for (const [table, text, head, chain] of [['audit_event', 'data_json', 'audit-head', 'acts'], ['view_event', 'because', 'view-head', 'views']] as const) {
      const { tamper, verify } = await filled()
      tamper(statement.replaceAll('{table}', table).replaceAll('{text}', text).replaceAll('{head}', head))
      const result = await verify()
      expect(result[chain].intact).toBe(false)
      expect(result[chain].problems.join('\n')).toMatch(problem)
      expect(result[chain === 'acts' ? 'views' : 'acts'].intact).toBe(true)
    }
  })

  it('an inserted link shows, even one copied from a true link', async () => {
    const { tamper, verify } = await filled()
    tamper('insert into audit_event select 13, \'new\', at, actor_id, actor_label, site_id, name, subject, subject_id, patient_id, data_json, mac, mac from audit_event where seq = 12')
    expect((await verify()).acts.problems).toContain('Number 13 was changed or was not written by this program.')
  })
})

describe('the triggers', () => {
  let t: Awaited<ReturnType<typeof filled>>
  beforeAll(async () => {
    t = await filled()
  })

  it.each([
    'update audit_event set data_json = \'{}\' where seq = 1',
    'delete from audit_event where seq = 1',
    'insert or replace into audit_event select * from audit_event where seq = 1',
    'update view_event set because = \'x\' where seq = 1',
    'delete from view_event where seq = 1',
    'insert or replace into view_event select * from view_event where seq = 1',
  ])('refuse: %s', async (statement) => {
    const { sql } = await import('kysely')
    await expect(sql.raw(statement).execute(t.db)).rejects.toThrow(/never altered/)
  })
})

describe('what is written', () => {
  it('is checked against the event\'s own schema', async () => {
    const t = await testContext()
    await expect(t.db.transaction().execute(trx => recordAuditEvent(t.context, trx, { name: 'role.granted', subject: 'user', subjectId: 'u', data: { role: 5 as never } }))).rejects.toThrow()
  })
  it('holds no field that the schema does not name', async () => {
    const t = await testContext()
    await t.db.transaction().execute(trx => recordAuditEvent(t.context, trx, { name: 'role.granted', subject: 'user', subjectId: 'u', data: { role: 'technologist', password: 'secret' } as never }))
    expect((await t.db.selectFrom('auditEvent').select('dataJson').executeTakeFirstOrThrow()).dataJson).toBe('{"role":"technologist"}')
  })
  it('of views is one line for the same look twice in a moment, and waits at most for 200', async () => {
    const t = await testContext()
    const context = t.as(await t.makeUser())
    for (let n = 0; n < 5; n++) recordView(context, { subject: 'study', subjectId: 'same' })
    expect(await flushViews(context)).toBe(1)
    for (let n = 0; n < 200; n++) recordView(context, { subject: 'study', subjectId: `s${n}` })
    await expect.poll(async () => (await t.db.selectFrom('viewEvent').select(eb => eb.fn.countAll<number>().as('n')).executeTakeFirstOrThrow()).n).toBe(201)
  })
})
