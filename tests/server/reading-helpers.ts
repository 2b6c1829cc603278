import { assessStoredStudy } from '#server/services/assess-stored-study'
import { handOverStudy } from '#server/services/hand-over-study'
import { hashPassword } from '#server/services/passwords'
import { saveDraft } from '#server/services/save-draft'
import { saveBodySize } from '#server/services/save-body-size'
import { removeRun } from '#server/services/save-run'
import { addTemperature } from '#server/services/save-temperature'
import { signReport } from '#server/services/sign-report'
import { takeStudy } from '#server/services/take-study'
import { viewReading } from '#server/services/view-reading'
import { meanings, reportDraftSchema, type ReportDraft } from '#shared/schemas/report'
import type { ReferralInput } from '#shared/schemas/referral'
import { clinic } from './bench-helpers'
import type { TestContext } from './helpers'

export const PASSWORD = 'lagoon-quartz-tulip-bridge'
export const meaning = meanings[0]

/** The reader's text for the study below. */
export const finishedDraft = (changes: Partial<ReportDraft> = {}): ReportDraft => ({
  ...reportDraftSchema.parse({
    impression: [{ id: 'line-1', words: 'Right median neuropathy at the wrist.', nerve: 'median', side: 'right', abnormal: true }, { id: 'line-2', words: 'No evidence of the same on the left.', nerve: 'median', side: 'left', abnormal: false }],
    correlation: 'Fits the history.',
    limitations: ['Small fibres are not assessed by this method'],
  }),
  ...changes,
})

/** A clinic with two neurologists who can sign, and studies on their way. */
export async function readingRoom(t: TestContext) {
  const c = await clinic(t)
  const passwordHash = await hashPassword(PASSWORD)
  const signer = async (name: string) => t.as(await t.makeUser({ name, printedName: name, credentials: 'MD', passwordHash, roles: [{ siteId: c.site.id, role: 'neurologist' }] }))
  const [reader, other] = [await signer('Rea Sample'), await signer('Otto Sample')]
  await c.adopt('aanem-ndtf-2016')

  /** An invented woman of 52 with six values outside, RIGHT median; handed over. */
  async function handedOver(changes: Partial<ReferralInput> = {}) {
    const by = c.technologist
    const id = await c.recording({ side: 'both', ...changes })
    await saveBodySize(by, { id, heightCm: 162, weightKg: 74 })
    for (const [side, celsius] of [['right', 32.6], ['left', 32.4]] as const) await addTemperature(by, { id, segment: 'hand', side, celsius, method: 'skin probe', warmed: false })
    const left = (await c.study(id)).study.runs.find(run => run.technique === 'ulnar-motor-adm' && run.side === 'left')
    if (left) await removeRun(by, { id, runId: left.id, reason: 'not needed' })
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2, amplitudeMv: 6.8, distanceMm: 80 }, { latencyMs: 9.2, amplitudeMv: 6.5, distanceMm: 215 }])
    await c.type(id, 'median-sensory-d2', 'right', [{ onsetLatencyMs: 3.8, peakLatencyMs: 4.6, amplitudeUv: 12, distanceMm: 140 }])
    await c.type(id, 'ulnar-sensory-d5', 'right', [{ onsetLatencyMs: 2.7, peakLatencyMs: 3.3, amplitudeUv: 14, distanceMm: 140 }])
    await c.type(id, 'ulnar-motor-adm', 'right', [{ latencyMs: 2.9, amplitudeMv: 9.6, distanceMm: 80 }, { latencyMs: 6.4, amplitudeMv: 9.4, distanceMm: 205 }, { latencyMs: 8.1, amplitudeMv: 9.2, distanceMm: 100 }])
    await c.type(id, 'median-motor-apb', 'left', [{ latencyMs: 3.9, amplitudeMv: 8.1, distanceMm: 80 }, { latencyMs: 7.8, amplitudeMv: 8, distanceMm: 210 }])
    await c.type(id, 'median-sensory-d2', 'left', [{ onsetLatencyMs: 3, peakLatencyMs: 3.7, amplitudeUv: 18, distanceMm: 140 }])
    await c.type(id, 'ulnar-sensory-d5', 'left', [{ onsetLatencyMs: 2.8, peakLatencyMs: 3.4, amplitudeUv: 16, distanceMm: 140 }])
    await handOverStudy(by, { id, note: '' })
    return id
  }

  /** Written and without an open point. */
  async function written(changes: Partial<ReportDraft> = {}, referral: Partial<ReferralInput> = {}) {
    const id = await handedOver(referral)
    await takeStudy(reader, id)
    await saveDraft(reader, { studyId: id, draft: finishedDraft(changes), revision: 0 })
    return id
  }

  /** What a signer's page sends. */
  async function lookedAt(studyId: string) {
    const view = await viewReading(reader, studyId)
    return { studyId, password: PASSWORD, meaning, draftRevision: view.draftRevision, fingerprint: view.fingerprint }
  }

  async function signed(changes: Partial<ReportDraft> = {}, referral: Partial<ReferralInput> = {}) {
    const id = await written(changes, referral)
    return { studyId: id, ...await signReport(reader, await lookedAt(id)) }
  }

  const flagged = async (id: string) => (await assessStoredStudy(t.context, id)).assessment.flagged
  return { ...c, reader, other, handedOver, written, lookedAt, signed, flagged }
}
export type ReadingRoom = Awaited<ReturnType<typeof readingRoom>>
