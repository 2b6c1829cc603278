import { mountSuspended } from '@nuxt/test-utils/runtime'
import * as z from 'zod'
import { expect, it } from 'vitest'
import { defineComponent, h } from 'vue'
import { useSchemaForm } from '~/composables/useSchemaForm'
import { veeSchema } from '~/utils/vee-schema'
import { siteSchema } from '#shared/schemas/user'

const runs = z.object({ runs: z.array(z.object({ side: z.string().min(1, 'Choose the side.') })), height: z.number().min(30, 'Height must be 30 or more.') })

it('refuses a bad form, with nested paths and the words of the schema', async () => {
  const { errors } = await veeSchema(runs).parse({ runs: [{ side: '' }], height: 3 })
  expect(errors).toEqual([{ path: 'runs[0].side', errors: ['Choose the side.'] }, { path: 'height', errors: ['Height must be 30 or more.'] }])
})

it('says what is wanted where the schema has no words of its own', async () => {
  const { errors } = await veeSchema(z.object({ height: z.number() })).parse({ height: 'tall' as unknown as number })
  expect(errors).toEqual([{ path: 'height', errors: ['Enter a number.'] }])
})

it('takes a good form and gives what the schema makes of it', async () => {
  const { value, errors } = await veeSchema(z.object({ name: z.string().trim() })).parse({ name: ' A ' })
  expect(errors).toEqual([])
  expect(value).toEqual({ name: 'A' })
})

/** A form outside of any page, to see what reaches `save`. */
async function formOf(initial: { name: string, town: string, timeZone: string, rooms: string[] }) {
  const saved: unknown[] = []
  let form: ReturnType<typeof useSchemaForm<typeof siteSchema>> | undefined
  await mountSuspended(defineComponent({
    setup() {
      form = useSchemaForm(siteSchema, initial, async (site) => {
        saved.push(site)
      })
      return () => h('div')
    },
  }))
  return { form: form!, saved }
}

it('saves nothing while the schema has complaints, and keeps what was typed', async () => {
  const { form, saved } = await formOf({ name: '', town: 'Lindau', timeZone: 'Europe/Prague', rooms: [] })
  expect(await form.submit()).toBe(false)
  expect(saved).toEqual([])
  expect(form.errorOf('name')).toBe('Enter the name.')
  expect(form.errorOf('rooms')).toBe('Name at least one room.')
  expect(form.values.town).toBe('Lindau')
})

it('saves once the complaints are mended, and then has none', async () => {
  const { form, saved } = await formOf({ name: '', town: 'Lindau', timeZone: 'Europe/Prague', rooms: ['1'] })
  await form.submit()
  form.values.name = 'East'
  expect(await form.submit()).toBe(true)
  expect(form.errorList.value).toEqual([])
  expect(saved).toHaveLength(1)
  expect(saved[0]).toMatchObject({ name: 'East', town: 'Lindau', address: '' })
})
