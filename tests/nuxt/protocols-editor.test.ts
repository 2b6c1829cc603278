import { mountSuspended } from '@nuxt/test-utils/runtime'
import { expect, it } from 'vitest'
import { reactive } from 'vue'
import type { ProtocolList } from '#shared/policies/protocols'
import ProtocolsEditor from '~/components/policy/ProtocolsEditor.vue'

/** The director's editor: what its buttons do to the list, and that a reader cannot change it. */
const list = (): ProtocolList => reactive({ protocols: [{ id: 'wrist', label: 'Wrist', basis: 'common practice', runs: [{ technique: 'median-motor-apb', side: 'asked' as const }, { technique: 'sural', side: 'both' as const }] }] })
const techniques = (body: ProtocolList) => body.protocols[0]!.runs.map(run => run.technique)

async function opened(body: ProtocolList) {
  const editor = await mountSuspended(ProtocolsEditor, { props: { modelValue: body, errorOf: (path: string) => path === 'body.protocols.0.runs.1.technique' ? 'This run is planned already.' : '' }, attachTo: document.body })
  await editor.get('button[aria-expanded]').trigger('click')
  return editor
}

it('a run goes earlier, later and away', async () => {
  const body = list()
  const editor = await opened(body)
  expect(editor.get('[data-run="0"] button[data-move="-1"]').attributes('disabled')).toBeDefined()
  await editor.get('[data-run="1"] button[data-move="-1"]').trigger('click')
  expect(techniques(body)).toEqual(['sural', 'median-motor-apb'])
  await editor.get('[data-run="0"] button[data-move="1"]').trigger('click')
  expect(techniques(body)).toEqual(['median-motor-apb', 'sural'])
  await editor.findAll('button').find(button => /^Take away\ssural/.test(button.text()))!.trigger('click')
  expect(techniques(body)).toEqual(['median-motor-apb'])
  editor.unmount()
})

it('a run is found by nerve, added once and no longer offered', async () => {
  const body = list()
  const editor = await opened(body)
  const search = editor.get('input[type=search]')
  await search.setValue('ulnar motor')
  await search.trigger('keydown', { key: 'Enter' })
  expect(techniques(body).at(-1)).toMatch(/^ulnar-motor/)
  await search.setValue('sural')
  expect(editor.findAll('button').some(button => /^Add\ssural sensory$/.test(button.text()))).toBe(false)
  editor.unmount()
})

it('a complaint of the server stands at its run', async () => {
  const editor = await opened(list())
  expect(editor.get('[data-run="1"]').text()).toContain('This run is planned already.')
  editor.unmount()
})

it('a protocol is added with a short name of its own and taken away', async () => {
  const body = list()
  const editor = await opened(body)
  await editor.get('[data-test=add-protocol]').trigger('click')
  expect(body.protocols.map(protocol => protocol.id)).toEqual(['wrist', 'question-2'])
  await editor.findAll('button').find(button => button.text() === 'Take this protocol away')!.trigger('click')
  expect(body.protocols.map(protocol => protocol.id)).toEqual(['wrist'])
  editor.unmount()
})

it('who only reads sees sides and basis, and no button', async () => {
  const editor = await mountSuspended(ProtocolsEditor, { props: { modelValue: list(), errorOf: () => '', readonly: true } })
  expect(editor.text()).toContain('both sides')
  expect(editor.text()).toContain('common practice')
  expect(editor.findAll('button')).toEqual([])
})
