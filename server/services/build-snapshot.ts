import type { Database } from '#server/database/connection'
import { cautionAnswers } from '#server/database/queries/bands'
import { policyInForce } from '#server/database/queries/policies'
import { copiesOf } from '#server/database/queries/referrals'
import { patientView } from '#server/database/queries/patients'
import { studyAround } from '#server/database/queries/study-around'
import { techniqueOf } from '#shared/catalogue/nerves'
import { SNAPSHOT_FORMAT, type ReportSnapshot } from '#shared/schemas/report'
import { DomainError } from '#shared/errors'
import type { ReportFormPolicy } from '#shared/policies/report-form'
import type { OtherLanguage } from '#shared/report/languages'
import { isOpen } from '#shared/report/sign-checks'
import type { ServiceContext } from './context'
import { printedNameOf } from './printed-name'
import type { ReadingFacts } from './reading-facts'
import { localDate } from './site-time'

type Signature = ReportSnapshot['signature']
type Person = NonNullable<ReportSnapshot['referral']['physician']>

async function personsOf(db: Database, ids: (string | null)[]): Promise<(Person & { id: string })[]> {
  return await db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId')
    .select(['physician.id', 'physician.name', 'practice.name as practiceName', 'practice.town'])
    .where('physician.id', 'in', ids.filter(id => id !== null)).orderBy('physician.name').execute()
}

/** Whom a referral names now: the referring physician and the copies. */
export async function addresseesOf(db: Database, { id, physicianId }: { id: string, physicianId: string | null }): Promise<Pick<ReportSnapshot['referral'], 'physician' | 'copies'>> {
  const copies = await copiesOf(db, id)
  const people = await personsOf(db, [physicianId, ...copies])
  const plain = ({ name, practiceName, town }: Person): Person => ({ name, practiceName, town })
  const physician = people.find(person => person.id === physicianId)
  return { physician: physician ? plain(physician) : null, copies: people.filter(person => person.id !== physicianId && copies.includes(person.id)).map(plain) }
}

async function referralPart(db: Database, { referral }: ReadingFacts): Promise<ReportSnapshot['referral']> {
  const { number, receivedAt, clinicalQuestion, side, symptoms, onset, examination, provisionalDiagnosis, urgency } = referral
  return {
    number, receivedAt, clinicalQuestion, side, symptoms, onset, examination, provisionalDiagnosis, urgency,
    cautions: cautionAnswers(referral.cautionsJson).filter(caution => caution.answer === 'yes').map(caution => caution.chip),
    ...await addresseesOf(db, referral),
  }
}

/** Everybody who wrote in the draft but the signer, who is named by the signature: a trainee who drafted stays named. */
async function writersOf(db: Database, reportId: string | undefined, signerId: string): Promise<string> {
  if (!reportId) return ''
  const writers = await db.selectFrom('reportWriter').innerJoin('user', 'user.id', 'reportWriter.userId').select(['name', 'printedName', 'credentials', 'inTraining'])
    .where('reportId', '=', reportId).where('userId', '<>', signerId).orderBy('firstAt').orderBy('userId').execute()
  return writers.map(({ name, printedName, credentials, inTraining }) => [printedName || name, credentials, inTraining ? 'in training' : ''].filter(Boolean).join(', ')).join('; ')
}

/**
 * The signature's name, moment and meaning (21 CFR 11.50(a)), from the account of the person who signs.
 * @throws DomainError 'not-allowed' without a signed-in person
 */
export async function signatureOf(context: ServiceContext, db: Database, meaning: string, at: string, timeZone: string): Promise<Signature> {
  const { userId } = context.actor
  const user = userId ? await db.selectFrom('user').select(['name', 'printedName', 'credentials']).where('id', '=', userId).executeTakeFirst() : undefined
  if (!userId || !user) throw new DomainError('not-allowed')
  return { userId, name: user.printedName || user.name, credentials: user.credentials, meaning, at, timeZone }
}

/** What of the circumstances the report says; choices and comments of the bench stay there. */
async function benchPart(db: Database, { assessed }: ReadingFacts): Promise<ReportSnapshot['bench']> {
  const { circumstances, overdue, visits, laterEntry, move, stopped, protocol } = await studyAround(db, assessed.record)
  return { circumstances, overdue, visits, laterEntry, move, stopped, protocol: protocol && { label: protocol.label, version: protocol.version } }
}

/** The caution in the language of the report, where the organisation worded it. */
function ownWords({ disclaimerIn }: ReportFormPolicy, language: string): { disclaimerTranslated?: string } {
  const words = language === 'en' ? '' : disclaimerIn[language as OtherLanguage]
  return words ? { disclaimerTranslated: words } : {}
}

/** The first signed copy: everything the report says, frozen; nothing of it is looked up again later. */
export async function buildSnapshot(context: ServiceContext, db: Database, facts: ReadingFacts, { number, signature }: { number: string, signature: Signature }): Promise<ReportSnapshot> {
  const { site, study, policy, assessment, draft, referral, assessed, report } = facts
  const organisation = await db.selectFrom('organisation').selectAll().where('id', '=', site.organisationId).executeTakeFirstOrThrow()
  const { body: form } = await policyInForce(db, 'report-form', null, localDate(new Date(signature.at), organisation.timeZone))
  const { id, recordNumber, familyName, givenName, birthDate, sexForLimits } = patientView(facts.patient)
  return {
    format: SNAPSHOT_FORMAT,
    demonstration: organisation.demonstration === 1 || context.settings.demonstration,
    number, version: 1, status: 'final', reason: '', supersedes: null,
    organisation: { name: organisation.name, disclaimer: form.disclaimer, ...ownWords(form, referral.reportLanguage), paperSize: form.paperSize, timeZone: organisation.timeZone },
    site: { name: site.name, town: site.town, address: site.address, phone: site.phone, timeZone: site.timeZone },
    language: referral.reportLanguage,
    patient: { id, recordNumber, familyName, givenName, birthDate, sexForLimits },
    referral: await referralPart(db, facts),
    study, studyNumber: assessed.record.number, startedAt: assessed.record.startedAt,
    technologist: await printedNameOf(db, assessed.record.technologistId),
    handOverNote: assessed.record.handOverNote,
    bench: await benchPart(db, facts),
    needleExamination: study.runs.some(run => techniqueOf(run.technique)?.kind === 'needle') ? 'Needle examination: see its table.' : '',
    policy, assessment,
    techniques: [...new Set(study.runs.map(run => run.technique))].flatMap(technique => techniqueOf(technique) ?? []),
    findings: facts.findings.filter(finding => !finding.left).map(({ key, runIds, text, edited }) => ({ key, runIds, text, edited })),
    draft,
    resolvedChecks: resolvedChecks(facts),
    changes: [],
    draftedBy: await writersOf(db, report?.id, signature.userId),
    signature,
  }
}

/** Questions that were answered by the reader; those kept at the bench stand with the study. */
export function resolvedChecks({ checks }: Pick<ReadingFacts, 'checks'>): ReportSnapshot['resolvedChecks'] {
  return checks.filter(check => check.strength !== 'ok' && !isOpen(check) && !check.key.startsWith('cold/'))
    .map(({ key, sentence, resolvedBecause = '' }) => ({ key, sentence, reason: resolvedBecause }))
}
