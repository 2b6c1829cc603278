import type { TypedSchema } from 'vee-validate'
import type * as z from 'zod'

type Issue = z.core.$ZodIssue

/** "runs[0].side": the way vee-validate and the server both name a field. */
export function issuePath(path: readonly PropertyKey[]): string {
  return path.map((step, index) => typeof step === 'number' ? `[${step}]` : index ? `.${String(step)}` : String(step)).join('')
}

/** Words for people where the schema gave none of its own. */
export function issueMessage(issue: Issue): string {
  if (issue.code === 'invalid_type' && /^Invalid input/.test(issue.message)) return issue.expected === 'number' ? 'Enter a number.' : 'Enter a value.'
  if (issue.code === 'too_small' && /^Too small/.test(issue.message)) return issue.origin === 'number' ? `Enter ${issue.minimum} or more.` : `Enter at least ${issue.minimum} characters.`
  if (issue.code === 'too_big' && /^Too big/.test(issue.message)) return issue.origin === 'number' ? `Enter ${issue.maximum} or less.` : `Shorten this to ${issue.maximum} characters.`
  if (issue.code === 'invalid_value') return 'Choose one of the answers.'
  return issue.message
}

/**
 * A zod 4 schema for vee-validate 4. Needed: vee-validate 4 handed a bare zod 4 schema calls everything right without a
 * word. tests/nuxt/vee-schema.test.ts guards it.
 *
 * @example
 * useForm({ validationSchema: veeSchema(siteSchema), initialValues })
 */
export function veeSchema<S extends z.ZodType>(schema: S): TypedSchema<z.input<S>, z.output<S>> {
  return {
    __type: 'VVTypedSchema',
    async parse(values) {
      const result = await schema.safeParseAsync(values)
      if (result.success) return { value: result.data, errors: [] }
      const byPath = new Map<string, string[]>()
      for (const issue of result.error.issues) {
        const path = issuePath(issue.path)
        byPath.set(path, [...(byPath.get(path) ?? []), issueMessage(issue)])
      }
      return { errors: [...byPath].map(([path, errors]) => ({ path, errors })) }
    },
    cast: values => values as z.input<S>,
  }
}
