import { sql } from 'kysely'
import type { Page } from '#shared/schemas/common'
import type { Namesake, PatientView } from '#shared/schemas/patient'
import type { Database } from '../connection'
import type { Patient } from '../tables/patient'
import { foldWords, patientWords } from './patient-words'

export function patientView(row: Patient): PatientView {
  const { id, recordNumber, familyName, givenName, birthDate, sexForLimits, gender, identifier, phone, email, mailConsent, interpreter, revision } = row
  return { id, recordNumber, familyName, givenName, birthDate, sexForLimits, gender, identifier, phone, email, mailConsent, interpreter, revision }
}

export async function patientById(db: Database, id: string): Promise<PatientView | undefined> {
  const row = await db.selectFrom('patient').selectAll().where('id', '=', id).executeTakeFirst()
  return row && patientView(row)
}

/** Ids of the patients whose record has a word beginning with each word of the expression. */
const idsMatching = (match: string) => sql<string>`(SELECT patient_id FROM patient_search WHERE patient_search MATCH ${match})`

/** The register: words of name, number or identifier, and a birth date in several spellings. */
export async function searchPatients(db: Database, { search, page, pageSize }: { search: string, page: number, pageSize: number }): Promise<Page<PatientView>> {
  const { match, birthDates } = patientWords(search)
  let found = db.selectFrom('patient').where('mergedInto', 'is', null)
  if (match) found = found.where('id', 'in', idsMatching(match))
  if (birthDates.length) found = found.where('birthDate', 'in', birthDates)
  const { total } = await found.select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await found.selectAll().orderBy('familyName').orderBy('givenName').orderBy('id').limit(pageSize).offset((page - 1) * pageSize).execute()
  return { rows: rows.map(patientView), total, page, pageSize }
}

type NameAndBirth = Pick<PatientView, 'familyName' | 'givenName' | 'birthDate'>
const swapDayAndMonth = (date: string) => date.replace(/^(\d{4})-(\d{2})-(\d{2})$/, '$1-$3-$2')

/** Why two entries may be one person, or undefined. */
function namesakeBecause(asked: NameAndBirth, other: NameAndBirth): Omit<Namesake, 'patient'> | undefined {
  const [family, given, otherFamily, otherGiven] = [asked.familyName, asked.givenName, other.familyName, other.givenName].map(foldWords)
  const sameName = family === otherFamily && given === otherGiven
  const swapped = family === otherGiven && given === otherFamily
  const sameBirth = asked.birthDate !== '' && asked.birthDate === other.birthDate
  if (sameBirth && sameName) return { because: 'same name and birth date', strength: 'likely-same' }
  if (sameBirth && swapped) return { because: 'same birth date, family and given name swapped', strength: 'likely-same' }
  if (sameName && asked.birthDate !== '' && swapDayAndMonth(asked.birthDate) === other.birthDate) return { because: 'same name, day and month of birth swapped', strength: 'likely-same' }
  if (sameBirth && (family === otherFamily || given === otherGiven)) return { because: `same birth date and ${family === otherFamily ? 'family' : 'given'} name`, strength: 'same-birth-date' }
  if (sameName) return { because: asked.birthDate === '' ? 'same name' : 'same name, another birth date', strength: 'same-name' }
  return sameBirth ? { because: 'same birth date', strength: 'same-birth-date' } : undefined
}

const strengths: Namesake['strength'][] = ['likely-same', 'same-name', 'same-birth-date']

/** Possible same persons, the likeliest first, 20 at most; shown before a new record is made. */
export async function namesakesOf(db: Database, asked: NameAndBirth & { exceptId?: string }): Promise<Namesake[]> {
  const names = patientWords(`${asked.familyName} ${asked.givenName}`).match
  const candidates = await db.selectFrom('patient').selectAll().where('mergedInto', 'is', null)
    .where(eb => eb.or([
      ...(names && asked.familyName && asked.givenName ? [eb('id', 'in', idsMatching(names))] : []),
      eb('birthDate', 'in', asked.birthDate ? [asked.birthDate] : []),
    ]))
    .$if(asked.exceptId !== undefined, query => query.where('id', '<>', asked.exceptId ?? ''))
    .limit(500).execute()
  return candidates.flatMap((row) => {
    const because = namesakeBecause(asked, row)
    return because ? [{ patient: patientView(row), ...because }] : []
  }).sort((a, b) => strengths.indexOf(a.strength) - strengths.indexOf(b.strength)).slice(0, 20)
}

/** Others with the same name or likely the same person: the band shows that they must be told apart. */
export async function namesakesToTellApart(db: Database, patient: NameAndBirth & { id: string }): Promise<PatientView[]> {
  const namesakes = await namesakesOf(db, { ...patient, exceptId: patient.id })
  return namesakes.filter(namesake => namesake.strength !== 'same-birth-date').map(namesake => namesake.patient)
}
