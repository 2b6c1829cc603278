import type { ReportSnapshot } from '../../schemas/report'
import { heading, paragraph, withSides, type Block, type ReportSection } from '../blocks'
import type { ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'

const line = (label: string, question: string, reason: string, words: ReportWords): Block =>
  paragraph([{ text: `${label}. `, strong: true }, ...withSides(question ? `${question} ` : ''), { text: `${words.changeReason}: ${reason}` }], 'faint')

function keptLines({ assessment, study }: ReportSnapshot, words: ReportWords): Block[] {
  return study.keptChecks.flatMap((kept) => {
    const remark = assessment.remarks.find(candidate => candidate.key === kept.key)
    return remark ? [line(words.keptAtBench, remark.sentence, kept.reason, words)] : []
  })
}

function coldLines({ draft, assessment }: ReportSnapshot, words: ReportWords): Block[] {
  return draft.interpretCold.flatMap((item) => {
    const run = assessment.runs.find(candidate => candidate.runId === item.runId)
    return run ? [line(words.interpretedCold, `${words.say(run.title)}.`, item.reason, words)] : []
  })
}

/** A question of the program reaches a signed report only with the reason it was answered with; nothing is answered silently. */
export const questions: ReportSection<ReportSource> = {
  id: 'questions',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const resolved = snapshot.resolvedChecks.map(check => line(words.resolvedByReader, check.sentence, check.reason, words))
    const lines = [...coldLines(snapshot, words), ...keptLines(snapshot, words), ...resolved]
    return lines.length > 0 ? [heading(2, words.questionsKept, 'questions'), ...lines] : []
  },
}
