import { heading, note, paragraph, type Block, type ReportSection } from '../blocks'
import type { ReportSource } from '../source'
import { reportWords } from '../words'

/** What a later version changed and why, before anything else; the first version has nothing here. */
export const changes: ReportSection<ReportSource> = {
  id: 'changes',
  blocks: ({ snapshot }) => {
    if (!snapshot.supersedes) return []
    const words = reportWords(snapshot.language)
    const lines = snapshot.changes.map((change): Block => paragraph([
      { text: `${change.what}. `, strong: true },
      { text: `${words.before}: ${change.before || words.none}; ${words.now}: ${change.after || words.none}` },
    ]))
    return [
      heading(2, words.changes(snapshot.supersedes.version), 'changes'),
      note('warning', `${words.supersedes(snapshot.supersedes.version)} ${words.changeReason}: ${snapshot.reason}`),
      ...lines,
    ]
  },
}
