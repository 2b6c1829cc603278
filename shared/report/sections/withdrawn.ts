import { note, type ReportSection } from '../blocks'
import type { ReportSource } from '../source'
import { reportWords } from '../words'

/**
 * A report entered in error says so in place of everything it said before: results and text are withdrawn together
 * (HL7 FHIR R4, DiagnosticReport notes: a withdrawn report carries a statement instead of its conclusion).
 */
export const withdrawn: ReportSection<ReportSource> = {
  id: 'withdrawn',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    return [note('warning', `${words.withdrawn} ${words.changeReason}: ${snapshot.reason}`)]
  },
}
