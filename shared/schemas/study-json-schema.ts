import * as z from 'zod'
import { STUDY_FORMAT, studySchema } from './study'

/**
 * The study format as JSON schema (draft 2020-12), for laboratories that write study files: what the file may hold
 * before defaults are filled in. Rules that a JSON schema cannot say (run ids differ) are in the program's own schema.
 *
 * @example
 * studyJsonSchema().title // => 'orthodrome-study/1'
 */
export function studyJsonSchema(): Record<string, unknown> {
  return { ...z.toJSONSchema(studySchema, { io: 'input' }), title: STUDY_FORMAT, $comment: 'Made from shared/schemas/study.ts by scripts/study-schema.ts.' }
}
