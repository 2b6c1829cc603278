import { describe, expect, it } from 'vitest'
import answerRoute from '../../server/api/questions/[id]/answer.post'
import openRoute from '../../server/api/questions/index.get'
import listRoute from '../../server/api/studies/[id]/questions/index.get'
import askRoute from '../../server/api/studies/[id]/questions/index.post'
import { openTasks } from '#server/database/queries/tasks'
import { answerQuestion, askReader, noteQuestionSeen, raiseOverdue, withdrawQuestion } from '#server/services/ask-reader'
import { moveState } from '#server/services/move-state'
import { readingFacts } from '#server/services/reading-facts'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'
import { cookieFor, serve } from './http'

const t = await testContext()
const c = await clinic(t)
const otherReader = await t.makeUser({ name: 'Dr Second', roles: [{ siteId: c.site.id, role: 'neurologist' }] })
const { call } = serve(t, [
  { method: 'get', path: '/api/questions', handler: openRoute },
  { method: 'post', path: '/api/questions/:id/answer', handler: answerRoute },
  { method: 'get', path: '/api/studies/:id/questions', handler: listRoute },
  { method: 'post', path: '/api/studies/:id/questions', handler: askRoute },
])
const stateOf = (id: string) => t.db.selectFrom('studyQuestion').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
const eventsOf = async (studyId: string) => (await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', studyId).where('name', 'like', 'question.%').orderBy('seq').execute()).map(event => event.name)
const tasksOf = async () => (await openTasks(t.db, { userId: otherReader.id, holdings: otherReader.holdings })).filter(task => task.kind === 'question-unanswered')

async function ask(readersHere = 1) {
  const studyId = await c.recording()
  const [run] = (await c.study(studyId)).study.runs
  const { id } = await askReader(c.technologist, { studyId, runId: run!.id, question: 'Repeat at the elbow?', readersHere })
  return { studyId, runId: run!.id, id }
}

describe('a question to the readers', () => {
  it('is seen by the first who opens it, answered once, and every step is in the trail', async () => {
    const { studyId, id, runId } = await ask()
    await noteQuestionSeen(c.neurologist, id)
    await noteQuestionSeen(t.as(otherReader), id)
    expect((await stateOf(id)).seenBy).toBe(c.neurologist.actor.userId)
    await answerQuestion(c.neurologist, { id, answer: 'Yes, please.', addRun: null })
    expect(await stateOf(id)).toMatchObject({ state: 'answered', answer: 'Yes, please.', closedBy: c.neurologist.actor.userId, runId })
    await expect(answerQuestion(t.as(otherReader), { id, answer: 'No.', addRun: null })).rejects.toMatchObject({ code: 'wrong-state', body: { message: expect.stringContaining('answered this question meanwhile') } })
    expect((await stateOf(id)).answer).toBe('Yes, please.')
    expect(await eventsOf(studyId)).toEqual(['question.asked', 'question.seen', 'question.answered'])
  })
  it('two answers at once: one wins', async () => {
    const { id } = await ask()
    const results = await Promise.allSettled([answerQuestion(c.neurologist, { id, answer: 'A', addRun: null }), answerQuestion(t.as(otherReader), { id, answer: 'B', addRun: null })])
    expect(results.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
  })
  it('is answered with a run, which stands behind the one asked about and counts as planned', async () => {
    const { studyId, id, runId } = await ask()
    const { addedRunId } = await answerQuestion(c.neurologist, { id, answer: '', addRun: { technique: 'ulnar-motor-adm', side: 'right' } })
    const { study, plannedRunIds } = await c.study(studyId)
    expect(study.runs.findIndex(run => run.id === addedRunId)).toBe(study.runs.findIndex(run => run.id === runId) + 1)
    expect(plannedRunIds).toContain(addedRunId)
    expect(study.runs.find(run => run.id === addedRunId)).toMatchObject({ technique: 'ulnar-motor-adm', side: 'right' })
  })
  it('no run is added after hand-over, and the question stays open', async () => {
    const { studyId, id } = await ask()
    await t.db.transaction().execute(trx => moveState(c.technologist, trx, { subject: 'study', id: studyId, from: 'recording', to: 'handed-over' }))
    await expect(answerQuestion(c.neurologist, { id, answer: '', addRun: { technique: 'ulnar-motor-adm', side: 'right' } })).rejects.toMatchObject({ code: 'wrong-state' })
    expect((await stateOf(id)).state).toBe('open')
  })
  it('is taken back by the bench', async () => {
    const { id } = await ask()
    await withdrawQuestion(c.technologist, id)
    expect((await stateOf(id)).state).toBe('withdrawn')
    await expect(answerQuestion(c.neurologist, { id, answer: 'late', addRun: null })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('is refused about a run of another study, and when the study is not being recorded', async () => {
    const other = await ask()
    const studyId = await c.recording()
    await expect(askReader(c.technologist, { studyId, runId: other.runId, question: 'What?', readersHere: 1 })).rejects.toMatchObject({ code: 'not-valid' })
    await expect(askReader(c.technologist, { studyId: await c.started(), runId: null, question: 'What?', readersHere: 1 })).rejects.toMatchObject({ code: 'wrong-state' })
  })
})

describe('when nobody answers', () => {
  it('it becomes one task of the readers after ten minutes, which the answer closes', async () => {
    const { id } = await ask()
    t.clock.minutes(9)
    await raiseOverdue(t.context)
    expect((await tasksOf()).some(task => task.link === `/questions/${id}`)).toBe(false)
    t.clock.minutes(1)
    await raiseOverdue(t.context)
    await raiseOverdue(t.context)
    const mine = (await tasksOf()).filter(task => task.link === `/questions/${id}`)
    expect(mine).toHaveLength(1)
    expect(mine[0]!.sentence).not.toMatch(/Family|Given/)
    await answerQuestion(c.neurologist, { id, answer: 'Now.', addRun: null })
    expect((await tasksOf()).some(task => task.link === `/questions/${id}`)).toBe(false)
  })
  it('with no reader in the program it is a task at once', async () => {
    const { id } = await ask(0)
    expect((await tasksOf()).some(task => task.link === `/questions/${id}`)).toBe(true)
  })
})

it('an open question is a check before signing, an answered one is shown', async () => {
  const { studyId, id } = await ask()
  const keys = async () => (await readingFacts(c.neurologist, t.db, studyId)).checks.filter(check => check.key.includes(id)).map(check => [check.key, check.strength])
  expect(await keys()).toEqual([[`question/${id}`, 'check']])
  await answerQuestion(c.neurologist, { id, answer: 'Yes.', addRun: null })
  expect(await keys()).toEqual([[`answered/${id}`, 'ok']])
})

describe('the routes', () => {
  it('readers of another site neither see nor answer it; the bench cannot answer', async () => {
    const elsewhere = await t.makeSite()
    const stranger = await cookieFor(t, await t.makeUser({ roles: [{ siteId: elsewhere.id, role: 'neurologist' }] }))
    const technologist = await cookieFor(t, c.technologistUser)
    const reader = await cookieFor(t, otherReader)
    const { id, studyId } = await ask()
    expect((await call('GET', '/api/questions', { cookie: stranger })).body).toEqual([])
    expect((await call('POST', `/api/questions/${id}/answer`, { cookie: stranger, body: { answer: 'x' } })).status).toBe(404)
    expect((await call('GET', `/api/studies/${studyId}/questions`, { cookie: stranger })).status).toBe(404)
    expect((await call('POST', `/api/questions/${id}/answer`, { cookie: technologist, body: { answer: 'x' } })).status).toBe(403)
    expect((await call('POST', `/api/questions/${id}/answer`, { cookie: reader, body: {} })).body).toMatchObject({ fields: [{ path: 'answer', message: 'Write the answer, or choose a run to add.' }] })
    expect((await call('GET', '/api/questions', { cookie: reader })).body).toEqual(expect.arrayContaining([expect.objectContaining({ id, question: 'Repeat at the elbow?' })]))
    expect((await call('POST', `/api/questions/${id}/answer`, { cookie: reader, body: { answer: 'Yes' } })).status).toBe(200)
  })
  it('says when no reader has the program open', async () => {
    const studyId = await c.recording()
    const answer = await call('POST', `/api/studies/${studyId}/questions`, { cookie: await cookieFor(t, c.technologistUser), body: { question: 'Anybody?' } })
    expect(answer.body).toMatchObject({ readersHere: 0 })
  })
})
