import { mountSuspended } from '@nuxt/test-utils/runtime'
import { flushPromises } from '@vue/test-utils'
import { expect, it } from 'vitest'
import ChoiceGroup from '~/components/form/ChoiceGroup.vue'
import DateField from '~/components/form/DateField.vue'
import ErrorSummary from '~/components/form/ErrorSummary.vue'
import NumberField from '~/components/form/NumberField.vue'
import PasswordField from '~/components/form/PasswordField.vue'
import TextField from '~/components/form/TextField.vue'

const last = (emitted: unknown[][] | undefined) => emitted?.at(-1)?.[0]

it('an error is tied to its field for a screen reader', async () => {
  const field = await mountSuspended(TextField, { props: { name: 'patient.familyName', label: 'Family name', error: 'Enter the family name.' } })
  const input = field.get('input')
  expect(input.attributes('id')).toBe('field-patient-familyName')
  expect(input.attributes('aria-invalid')).toBe('true')
  expect(field.get(`#${input.attributes('aria-describedby')}`).text()).toBe('Enter the family name.')
  expect(field.get('label').attributes('for')).toBe('field-patient-familyName')
})

it.each([
  { typed: '162', value: 162 },
  { typed: '3,9', value: 3.9 },
  { typed: ' 0.25 ', value: 0.25 },
  { typed: '', value: null },
  { typed: '4.', value: '4.' },
  { typed: '12 mm', value: '12 mm' },
  { typed: '1e3', value: '1e3' },
])('a number field makes $value of "$typed" and leaves the text alone', async ({ typed, value }) => {
  const field = await mountSuspended(NumberField, { props: { name: 'heightCm', label: 'Height', unit: 'cm', modelValue: 1 } })
  await field.get('input').setValue(typed)
  expect(last(field.emitted('update:modelValue'))).toBe(value)
  expect(field.get('input').element.value).toBe(typed)
  expect(field.get('label').text()).toBe('Height, cm')
})

it.each([
  { typed: '2026-03-09', value: '2026-03-09' },
  { typed: '20260309', value: '2026-03-09' },
  { typed: '9 March 2026', value: '2026-03-09' },
  { typed: '9 Mar 2026', value: '2026-03-09' },
  { typed: '2026-02-30', value: '2026-02-30' },
  { typed: '03/09/26', value: '03/09/26' },
])('a date field makes "$value" of "$typed"', async ({ typed, value }) => {
  const field = await mountSuspended(DateField, { props: { name: 'birthDate', label: 'Date of birth', modelValue: '' } })
  await field.get('input').setValue(typed)
  expect(last(field.emitted('update:modelValue'))).toBe(value)
})

it('a day that does not exist is not shown as one', async () => {
  const field = await mountSuspended(DateField, { props: { name: 'birthDate', label: 'Date of birth', modelValue: '2026-02-30' } })
  expect(field.text()).not.toContain('February')
  await field.setProps({ modelValue: '2026-02-28' })
  expect(field.text()).toContain('28 February 2026')
})

it('the error summary takes the focus and its links put the cursor into the field', async () => {
  const field = await mountSuspended(ChoiceGroup, { props: { name: 'side', legend: 'Side', options: [{ value: 'right', label: 'RIGHT' }, { value: 'left', label: 'LEFT' }] }, attachTo: document.body })
  const summary = await mountSuspended(ErrorSummary, { props: { errors: [] as { path: string, message: string }[] }, attachTo: document.body })
  expect(summary.find('[role=alert]').exists()).toBe(false)
  await summary.setProps({ errors: [{ path: 'side', message: 'Choose the side.' }] })
  await flushPromises()
  expect(document.activeElement?.getAttribute('role')).toBe('alert')
  const link = summary.get('a')
  expect(link.attributes('href')).toBe('#field-side')
  await link.trigger('click')
  expect((document.activeElement as HTMLInputElement).value).toBe('right')
  expect(field.get('fieldset').element.contains(document.activeElement)).toBe(true)
  field.unmount()
  summary.unmount()
})

it('a password can be shown and hidden, and keeps its autocomplete', async () => {
  const field = await mountSuspended(PasswordField, { props: { name: 'password', label: 'Password', autocomplete: 'current-password' } })
  expect(field.get('input').attributes()).toMatchObject({ type: 'password', autocomplete: 'current-password' })
  await field.get('button').trigger('click')
  expect(field.get('input').attributes('type')).toBe('text')
  expect(field.get('button').text()).toBe('Hide')
})
