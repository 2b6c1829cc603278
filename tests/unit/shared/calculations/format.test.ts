import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import ucum from '@lhncbc/ucum-lhc'
import { describe, expect, it } from 'vitest'
import { quantityInfo, quantityInfos } from '#shared/calculations/quantity-info'
import { studyJsonSchema } from '#shared/schemas/study-json-schema'
import { carpalTunnelStudy } from '../../../fixtures/carpal-tunnel-study'

it('shared/schemas/study.schema.json says what the program\'s schema says', () => {
  expect(JSON.parse(readFileSync('shared/schemas/study.schema.json', 'utf8')), 'run: node scripts/run-ts.mjs scripts/study-schema.ts').toEqual(JSON.parse(JSON.stringify(studyJsonSchema())))
})

describe('quantities', () => {
  const utils = ucum.UcumLhcUtils.getInstance()
  it.each(quantityInfos.map(info => [info.id, info.ucum]))('%s: %s is a UCUM code', (_, code) => expect(utils.validateUnitString(code)).toMatchObject({ status: 'valid', ucumCode: code }))
  it('have one entry each', () => expect(new Set(quantityInfos.map(info => info.id)).size).toBe(quantityInfos.length))
  it('an unknown one still prints', () => expect(quantityInfo('somethingNew')).toMatchObject({ id: 'somethingNew', unit: '', printDecimals: 2 }))
})

describe('npm run evaluate', () => {
  const folder = mkdtempSync(join(tmpdir(), 'orthodrome-evaluate-'))
  const evaluate = (name: string, content: string) => {
    const file = join(folder, name)
    writeFileSync(file, content)
    const { status, stdout, stderr } = spawnSync(process.execPath, ['scripts/run-ts.mjs', 'scripts/evaluate.ts', file], { encoding: 'utf8' })
    return { status, stdout, stderr: stderr.replaceAll(`${file}: `, '') }
  }
  it('prints the assessment of a wrapped study', () => {
    const { status, stdout } = evaluate('wrapped.json', JSON.stringify({ study: carpalTunnelStudy(), sets: ['aanem-ndtf-2016'] }))
    expect(status).toBe(0)
    expect(JSON.parse(stdout)).toMatchObject({ calculationVersion: '1.1.1', studyId: 'study-carpal-tunnel' })
    expect(JSON.parse(stdout).flagged).toHaveLength(6)
  }, 30_000)
  it('a bare study has no set', () => {
    const { status, stdout } = evaluate('bare.json', JSON.stringify(carpalTunnelStudy()))
    expect([status, JSON.parse(stdout).flagged]).toEqual([0, []])
  }, 30_000)
  it.each([
    ['a wrong field', JSON.stringify({ ...carpalTunnelStudy(), studyDate: '2026-13-01' }), 'studyDate: Enter the date as year-month-day, for example 2026-03-09.'],
    ['a misspelt field', JSON.stringify({ ...carpalTunnelStudy(), heigthCm: 160 }), 'heigthCm: there is no such field.'],
    ['a set that does not exist', JSON.stringify({ study: carpalTunnelStudy(), sets: ['nobody-1900'] }), 'sets: there is no set nobody-1900; there are'],
    ['no JSON', '{', 'is not JSON'],
  ])('%s ends with 1 and says where', (_, content, message) => {
    const { status, stdout, stderr } = evaluate('bad.json', content)
    expect([status, stdout]).toEqual([1, ''])
    expect(stderr).toContain(message)
  }, 30_000)
})
