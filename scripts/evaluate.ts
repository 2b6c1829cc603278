/**
 * Assesses study files with the calculation library, without server or database, so that a laboratory can check the
 * program against its own cases.
 *
 *   npm run --silent evaluate -- study.json [another.json …]
 *
 * Prints the full assessment as JSON: one object for one file, a list for several. Exit 1, with a message per fault and
 * the path to it, when a file is not what it should be; nothing is printed on standard output then.
 *
 * A file is a study (format `orthodrome-study/1`, JSON schema in shared/schemas/study.schema.json), or an object
 *
 *   { "study": Study, "sets": ["aanem-ndtf-2016"], "policy": { "handMinimumC": 32 } }
 *
 * `sets`: ids of shipped reference sets, first one first; they count as adopted. `policy`: anything of a site's policy
 * that differs from the defaults; its own `adopted` stands before `sets`. A study without sets reads
 * "no limit: no set adopted here". Temperatures, distances and all other units are those of the field names.
 */
import { readFileSync } from 'node:fs'
import * as z from 'zod'
import { referenceTable, referenceTables } from '#reference-tables'
import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy, type AdoptedSet, type Assessment, type Policy } from '#shared/calculations/types'
import { idSchema } from '#shared/schemas/common'
import { studySchema } from '#shared/schemas/study'

const adoptedSchema = z.strictObject({
  setId: idSchema, version: z.number().int().min(1), techniques: z.array(idSchema).optional(),
  adoptedOn: z.string().default(''), adoptedBy: z.string().default(''), verifiedRows: z.array(z.string()).default([]),
})

const policySchema = z.strictObject({
  handMinimumC: z.number(), footMinimumC: z.number(), distanceUncertaintyMm: z.number().min(0), latencyUncertaintyMs: z.number().min(0),
  temperatureCorrection: z.boolean(), patternsOn: z.array(z.string()), patternsOff: z.array(z.string()), leaveOutEntrapmentSites: z.boolean(),
  adopted: z.array(adoptedSchema),
}).partial()

const fileSchema = z.strictObject({ study: studySchema, policy: policySchema.optional(), sets: z.array(idSchema).optional() })

class BadInput extends Error {}

function readJson(file: string): unknown {
  let text: string
  try {
    text = readFileSync(file, 'utf8')
  }
  catch {
    throw new BadInput(`${file}: cannot be read.`)
  }
  try {
    return JSON.parse(text)
  }
  catch (error) {
    throw new BadInput(`${file}: is not JSON (${(error as Error).message}).`)
  }
}

/** A bare study is one without the key `study`. */
function parseFile(file: string): z.infer<typeof fileSchema> {
  const json = readJson(file)
  const isWrapped = typeof json === 'object' && json !== null && 'study' in json
  const parsed = fileSchema.safeParse(isWrapped ? json : { study: json })
  if (parsed.success) {
    const unknown = unknownKeys(isWrapped ? json : { study: json }, parsed.data, [])
    if (unknown.length > 0) throw new BadInput(unknown.map(path => `${file}: ${(isWrapped ? path : path.slice(1)).join('.')}: there is no such field.`).join('\n'))
    return parsed.data
  }
  const faults = parsed.error.issues.map((issue) => {
    const path = isWrapped ? issue.path : issue.path.slice(1)
    return `${file}: ${path.length > 0 ? path.join('.') : '(whole file)'}: ${plain(issue.message)}`
  })
  throw new BadInput(faults.join('\n'))
}

const plain = (message: string) => message.replace(/^Invalid (?:input|option): e/, 'E')

/** A misspelt field would otherwise be dropped in silence, and a limit with it. */
function unknownKeys(given: unknown, read: unknown, path: string[]): string[][] {
  if (Array.isArray(given)) return given.flatMap((item, index) => unknownKeys(item, (read as unknown[])[index], [...path, String(index)]))
  if (typeof given !== 'object' || given === null || typeof read !== 'object' || read === null) return []
  return Object.entries(given).flatMap(([key, value]) => key in read ? unknownKeys(value, (read as Record<string, unknown>)[key], [...path, key]) : [[...path, key]])
}

function adopt(file: string, id: string): AdoptedSet {
  const table = referenceTable(id)
  if (!table) throw new BadInput(`${file}: sets: there is no set ${id}; there are ${referenceTables.map(one => one.id).join(', ')}.`)
  return { setId: table.id, version: table.version, adoptedOn: '', adoptedBy: 'this file', verifiedRows: [] }
}

/** What the file leaves out keeps its default. */
function policyOf(file: string, { policy = {}, sets = [] }: z.infer<typeof fileSchema>): Policy {
  const adopted = [...(policy.adopted ?? []), ...sets.map(id => adopt(file, id))]
  const missing = adopted.find(one => !referenceTable(one.setId, one.version))
  if (missing) throw new BadInput(`${file}: policy.adopted: there is no set ${missing.setId}, version ${missing.version}.`)
  return { ...defaultPolicy, ...policy, adopted }
}

function evaluate(file: string): Assessment {
  const input = parseFile(file)
  return assessStudy(input.study, referenceTables, policyOf(file, input))
}

function main(files: readonly string[]): number {
  if (files.length === 0) {
    console.error('Name at least one study file: npm run --silent evaluate -- study.json')
    return 1
  }
  const faults: string[] = []
  const assessments = files.flatMap((file) => {
    try {
      return [evaluate(file)]
    }
    catch (error) {
      if (!(error instanceof BadInput)) throw error
      faults.push(error.message)
      return []
    }
  })
  if (faults.length > 0) {
    console.error(faults.join('\n'))
    return 1
  }
  process.stdout.write(`${JSON.stringify(files.length === 1 ? assessments[0] : assessments, null, 2)}\n`)
  return 0
}

process.exitCode = main(process.argv.slice(2))
