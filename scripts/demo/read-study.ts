import { readingFacts } from '#server/services/reading-facts'
import { saveDraft } from '#server/services/save-draft'
import { signProven, type SignedReport } from '#server/services/sign-report'
import { takeStudy } from '#server/services/take-study'
import { viewReading } from '#server/services/view-reading'
import { flagsOf, isOpen } from '#shared/report/sign-checks'
import { meanings, reportDraftSchema, type ImpressionLine, type ReportDraft } from '#shared/schemas/report'
import { as, type MadeReferral, type Maker } from './make-study'

/** The impression that an invented reader would write: what the picture says, on the sides that have flags. */
function impressionFor({ picture }: MadeReferral, flags: ReturnType<typeof flagsOf>, isGerman: boolean): ImpressionLine[] {
  const sides = (['right', 'left'] as const).filter(side => flags.some(flag => flag.side === side && (flag.nerve === picture.nerve || picture.nerve === 'sural')))
  const side = sides.length === 2 ? 'both' : sides[0]
  const lines = side ? picture.impression(side).map(line => isGerman ? { ...line, words: picture.german(side) } : line) : [{ words: isGerman ? 'Kein krankhafter Befund der untersuchten Nerven, der die Frage beantwortet.' : 'No abnormality of the nerves studied that answers the question.', nerve: null, side: null, abnormal: false }]
  return lines.map((line, index) => ({ id: `line-${index + 1}`, words: line.words, nerve: line.nerve, pattern: null, side: line.side, degree: null, abnormal: line.abnormal }))
}

const english = { correlation: ['Fits the history.', 'Explains the symptoms in part.', 'To be read with the clinical examination.'], limitations: ['Small fibres are not assessed by this method.', 'none identified', 'Needle examination was not performed.'], recommendation: 'Clinical review in three months.' }
const german = { correlation: ['Passt zur Anamnese.', 'Erklärt die Beschwerden teilweise.', 'Zusammen mit der klinischen Untersuchung zu lesen.'], limitations: ['Dünne Fasern werden mit dieser Methode nicht erfasst.', 'Keine erkannt.', 'Eine Nadeluntersuchung wurde nicht durchgeführt.'], recommendation: 'Klinische Kontrolle in drei Monaten.' }

/** Takes the study and writes the draft; answers what the program asks before signing. */
export async function draft(maker: Maker, referral: MadeReferral, studyId: string): Promise<void> {
  const context = await as(maker, 'neurologist', referral.site.id)
  await takeStudy(context, studyId)
  maker.clock.forward(maker.random.whole(2, 8))
  const facts = await readingFacts(context, context.db, studyId)
  const assessment = facts.assessed.assessment
  const isGerman = facts.referral.reportLanguage === 'de'
  const texts = isGerman ? german : english
  const written: ReportDraft = reportDraftSchema.parse({
    impression: impressionFor(referral, flagsOf({ assessment }), isGerman),
    correlation: maker.random.pick(texts.correlation),
    limitations: [maker.random.pick(texts.limitations)],
    recommendation: maker.random.chance(0.3) ? texts.recommendation : '',
  })
  const first = await saveDraft(context, { studyId, draft: written, revision: 0 })
  const open = first.view.checks.filter(check => isOpen(check))
  if (open.length) await saveDraft(context, { studyId, draft: { ...written, resolved: open.map(check => ({ key: check.key, about: check.about, reason: 'Seen; does not change the reading.' })) }, revision: first.revision })
}

/** Signs when nothing stands in the way; returns null when something does, and the study stays with the reader. */
export async function sign(maker: Maker, referral: MadeReferral, studyId: string): Promise<SignedReport | null> {
  const context = await as(maker, 'neurologist', referral.site.id)
  maker.clock.forward(maker.random.whole(1, 5))
  const view = await viewReading(context, studyId)
  if (view.checks.some(check => isOpen(check))) return null
  return await signProven(context, { studyId, meaning: meanings[0], draftRevision: view.draftRevision, fingerprint: view.fingerprint })
}
