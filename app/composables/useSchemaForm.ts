import { useForm, type GenericObject } from 'vee-validate'
import type * as z from 'zod'
import type { FieldError } from '#shared/errors'

/**
 * A form checked by a shared schema: errors appear on save, beside the field and in the summary, in the same words;
 * what the server complains about joins them. Nothing typed is cleared.
 *
 * @example
 * const { values, field, errorOf, errorList, submit, busy, problem } = useSchemaForm(siteSchema, initial, async (site) => {
 *   await api('/api/sites', { method: 'POST', body: site })
 * })
 * // <ErrorSummary :errors="errorList" :problem="problem" />
 * // <TextField v-model="values.name" name="name" label="Name" :error="errorOf('name')" />
 */
export function useSchemaForm<S extends z.ZodType<GenericObject, GenericObject>>(schema: S, initialValues: z.input<S>, save: (values: z.output<S>) => Promise<void>) {
  const values = reactive(plainCopy(initialValues)) as z.input<S>
  const found = ref<FieldError[]>([])
  const { busy, problem, send } = useSending()
  const form = useForm<GenericObject, z.output<S>>({ validationSchema: veeSchema(schema) })

  const errorList = computed<FieldError[]>(() => [...found.value, ...(problem.value?.fields ?? [])])
  const errorOf = (path: string) => errorList.value.find(error => error.path === path)?.message ?? ''

  /** The values as the schema makes them, or null when it has complaints, which then stand in `errorList`. */
  async function check(): Promise<z.output<S> | null> {
    form.setValues(plainCopy(values), false)
    const result = await form.validate({ mode: 'force' })
    found.value = inFormOrder(Object.entries(result.errors as Record<string, string | undefined>).map(([path, message]) => ({ path, message: message ?? '' })), Object.keys(initialValues))
    return result.valid && result.values ? result.values as z.output<S> : null
  }

  /** True when it was checked and saved. */
  async function submit(): Promise<boolean> {
    problem.value = null
    const checked = await check()
    if (!checked) return false
    return await send(async () => {
      await save(checked)
      return true
    }) ?? false
  }

  return { values, errorList, errorOf, submit, check, busy, problem }
}

/** As the fields stand in the form, not by the alphabet. */
function inFormOrder(errors: FieldError[], order: string[]): FieldError[] {
  const place = (error: FieldError) => order.indexOf(error.path.split(/[.[]/)[0] ?? '')
  return errors.toSorted((a, b) => place(a) - place(b))
}

/** A deep copy free of proxies, as the schema and the request take it. */
function plainCopy<T>(value: T): T {
  return JSON.parse(JSON.stringify(value)) as T
}
