import type { PatientBand } from '#shared/schemas/patient'
import { cautions, type CautionId, type ThreeAnswer } from '#shared/schemas/referral'
import type { Database } from '../connection'
import { namesakesToTellApart } from './patients'

export { routeOf } from './route'

/**
 * Age in completed years on a day, both as ISO dates. Someone born on 29 February is a year older on 1 March of other years.
 * @example completedYears('1974-03-14', '2026-12-02') // => 52
 */
export function completedYears(birthDate: string, day: string): number {
  const years = Number(day.slice(0, 4)) - Number(birthDate.slice(0, 4))
  return day.slice(5) < birthDate.slice(5) ? years - 1 : years
}

/** Answers to the cautions as the referral keeps them; what was never answered is "not asked". */
export function cautionAnswers(cautionsJson: string): { id: CautionId, label: string, chip: string, answer: ThreeAnswer }[] {
  const answers = JSON.parse(cautionsJson) as Partial<Record<CautionId, ThreeAnswer>>
  return cautions.map(caution => ({ ...caution, answer: answers[caution.id] ?? 'not-asked' }))
}

/**
 * The band above everything that belongs to a referral: who, what was asked, cautions. The age is that on the day of the
 * study where there is one, else on `today`.
 */
export async function patientBand(db: Database, referralId: string, today = new Date().toISOString().slice(0, 10)): Promise<PatientBand | undefined> {
  const row = await db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId')
    .leftJoin('study', join => join.onRef('study.referralId', '=', 'referral.id').on('study.state', '<>', 'entered-in-error'))
    .select(['patient.id', 'familyName', 'givenName', 'birthDate', 'recordNumber', 'sexForLimits', 'clinicalQuestion', 'side', 'cautionsJson', 'study.heightCm', 'study.studyDate'])
    .where('referral.id', '=', referralId).orderBy('study.createdAt', 'desc').limit(1).executeTakeFirst()
  if (!row) return undefined
  const answers = cautionAnswers(row.cautionsJson)
  const namesakes = await namesakesToTellApart(db, row)
  return {
    patientId: row.id, familyName: row.familyName, givenName: row.givenName, birthDate: row.birthDate,
    ageYears: completedYears(row.birthDate, row.studyDate ?? today),
    recordNumber: row.recordNumber, sexForLimits: row.sexForLimits, heightCm: row.heightCm,
    question: row.clinicalQuestion, side: row.side,
    cautions: answers.filter(caution => caution.answer === 'yes').map(caution => caution.chip),
    cautionsAsked: answers.every(caution => caution.answer !== 'not-asked'),
    namesakes: namesakes.length,
  }
}
