import { note, withSides, type Block, type KeyValueBlock, type ReportSection, type Words } from '../blocks'
import { formatClock, formatDay } from '../dates'
import type { ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'

type Item = KeyValueBlock['items'][number]
const item = (label: string, words: Words[] | string): Item => ({ label, words: typeof words === 'string' ? withSides(words) : words })

function born({ snapshot }: ReportSource, words: ReportWords): string {
  const { ageYears, heightCm, weightKg } = snapshot.assessment.person
  const sex = snapshot.patient.sexForLimits
  const age = ageYears === null ? '' : ` (${Math.floor(ageYears)})`
  const size = [sex && words.sex[sex], heightCm !== null && `${heightCm} cm`, weightKg !== null && `${weightKg} kg`]
  return [formatDay(snapshot.patient.birthDate, words.days) + age, ...size].filter(Boolean).join(', ')
}

function studied({ snapshot }: ReportSource, words: ReportWords): string {
  const day = formatDay(snapshot.study.studyDate, words.days)
  const further = (snapshot.bench?.visits ?? []).map(visit => formatDay(visit.day))
  if (further.length) return [day, ...further].join(' and ')
  return snapshot.startedAt ? `${day}, ${formatClock(snapshot.startedAt, snapshot.site.timeZone)}` : day
}

const person = ({ name, practiceName, town }: { name: string, practiceName: string, town: string }) => [name, practiceName, town].filter(Boolean).join(', ')

function items(source: ReportSource, words: ReportWords): Item[] {
  const { snapshot } = source
  const { referral, patient } = snapshot
  const names = words.identity
  const name: Words[] = [{ text: `${patient.familyName.toLocaleUpperCase('en')}, ${patient.givenName}`, strong: true }]
  return [
    item(names.patient, name),
    item(names.studied, studied(source, words)),
    item(names.born, born(source, words)),
    item(names.site, [snapshot.site.name, snapshot.site.town].filter(Boolean).join(', ')),
    item(names.record, patient.recordNumber),
    item(names.referredBy, referral.physician ? person(referral.physician) : words.notRecorded),
    item(names.asked, referral.clinicalQuestion || words.notRecorded),
    item(names.side, referral.side ? words.sides[referral.side] : words.notRecorded),
    item(names.study, `${snapshot.studyNumber} · ${referral.number}`),
    ...(referral.copies.length > 0 ? [item(names.copies, referral.copies.map(person).join('; '))] : []),
    ...(referral.cautions.length > 0 ? [item(names.cautions, referral.cautions.map(words.say).join(', '))] : []),
  ]
}

/** Who, where, when, and what was asked. */
export const identity: ReportSection<ReportSource> = {
  id: 'identity',
  blocks: (source) => {
    const words = reportWords(source.snapshot.language)
    const blocks: Block[] = [{ kind: 'keyValue', items: items(source, words) }]
    if (source.preliminary) blocks.push(note('warning', words.preliminaryNote))
    if (source.snapshot.demonstration) blocks.push(note('plain', words.demonstrationNote))
    return blocks
  },
}
