/**
 * Writes shared/schemas/study.schema.json, the JSON schema of the study format, from the schema the program itself uses.
 *
 *   node scripts/run-ts.mjs scripts/study-schema.ts
 *
 * The test tests/unit/shared/calculations/study-schema.test.ts fails when the file is behind.
 */
import { writeFileSync } from 'node:fs'
import { studyJsonSchema } from '#shared/schemas/study-json-schema'

writeFileSync('shared/schemas/study.schema.json', `${JSON.stringify(studyJsonSchema(), null, 2)}\n`)
