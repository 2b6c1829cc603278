import { mountSuspended } from '@nuxt/test-utils/runtime'
import { expect, it } from 'vitest'
import { defineComponent, h } from 'vue'
import { storeBeforeIdle, useBeforeIdle } from '~/composables/useBeforeIdle'

const page = (act: () => Promise<unknown>) => mountSuspended(defineComponent({
  setup() {
    useBeforeIdle(act)
    return () => h('div')
  },
}))

it('what was typed is stored before an unattended page is left, and a failure does not hold it', async () => {
  const stored: string[] = []
  const first = await page(async () => stored.push('first'))
  const second = await page(() => Promise.reject(new Error('no connection')))
  await storeBeforeIdle()
  expect(stored).toEqual(['first'])
  first.unmount()
  second.unmount()
  await storeBeforeIdle()
  expect(stored).toEqual(['first'])
})
