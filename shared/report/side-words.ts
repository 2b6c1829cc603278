import { nerveLabels } from '../catalogue/nerve-labels'
import type { Side } from '../schemas/common'
import { isReportLanguage, type ReportLanguage } from './languages'

/** How a language speaks of sides, of nerves, and of nothing being there: what the wrong-side rule reads. */
export interface SideWords {
  named: Record<Side, RegExp>
  /** Both sides, where neither is named. */
  both: RegExp
  /** Looks like a side and is none: "left over", "Rechtshänder". */
  notASide: RegExp
  /** Abbreviations whose full stop ends no clause, with what stands in their place. */
  written: readonly (readonly [RegExp, string])[]
  /** A clause ends at a full stop, a semicolon, or where the sense turns. */
  clauseEnds: RegExp
  saysNo: RegExp
  /** Words that point to a nerve; the longer name first, so that "superficial fibular" is not also "fibular". */
  nerves: readonly (readonly [RegExp, string])[]
}

const escaped = (text: string) => text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&')
const labelled = Object.entries(nerveLabels).sort(([, a], [, b]) => b.length - a.length).map(([nerve, label]) => [new RegExp(`\\b${escaped(label)}\\b`, 'gi'), nerve] as const)

const english: SideWords = {
  named: { right: /\bright(?:-(?:sided|hand(?:ed)?))?\b/i, left: /\bleft(?:-(?:sided|hand(?:ed)?))?\b/i },
  both: /\bbilateral(?:ly)?\b|\bboth\b|\beither side\b/i,
  // Only where it cannot be a side: "is left" alone may well be one, and a needless question does no harm.
  notASide: /\bleft (?:out|undone|over)\b|\bleft to (?:do|say|be)\b/gi,
  written: [],
  clauseEnds: /[.;\n]+|,?\s+(?:but|whereas|while|however)\s+|,\s+(?=(?:no|not|without|normal)\b)/i,
  saysNo: /\b(?:no|not|never|without|normal|unremarkable|within (?:the )?limits|spared|preserved|nothing|none)\b/i,
  nerves: [...labelled, [/\bcarpal\b/gi, 'median'], [/\bcubital\b/gi, 'ulnar'], [/\bperoneal\b/gi, 'fibular'], [/\btarsal tunnel\b/gi, 'tibial'], [/\bfoot drop\b/gi, 'fibular']],
}

/** `\b` knows no umlauts, so German words end at what is no letter. */
const german: SideWords = {
  named: { right: /(?<!\p{L})recht(?:s(?:seitig\p{L}*|betont\p{L}*)?|e[rnms]?)(?!\p{L})/iu, left: /(?<!\p{L})link(?:s(?:seitig\p{L}*|betont\p{L}*)?|e[rnms]?)(?!\p{L})/iu },
  both: /(?<!\p{L})(?:beid(?:er)?seit\p{L}*|beide[rnms]?|bilateral\p{L}*)(?!\p{L})/iu,
  notASide: /(?<!\p{L})(?:rechts|links)händ\p{L}*/giu,
  written: [[/(?<!\p{L})re\.(?=\s|$|,|;)/giu, 'rechts'], [/(?<!\p{L})li\.(?=\s|$|,|;)/giu, 'links'], [/(?<!\p{L})(?:bds|bds|bd|beids)\.(?=\s|$|,|;)/giu, 'beidseits'], [/(?<!\p{L})(Nn|N|Rr|R|Mm|M|Dig|bzw|ca|z\. ?B|d\. ?h|u\. ?a|V\. ?a)\.\s*/giu, '$1 ']],
  clauseEnds: /[.;\n]+|,?\s+(?:aber|jedoch|während|hingegen|dagegen|sondern)\s+|,\s+(?=(?:kein\p{L}*|nicht|ohne|normal\p{L}*)(?!\p{L}))/iu,
  saysNo: /(?<!\p{L})(?:kein\p{L}*|nicht|nichts|nie|ohne|normal\p{L}*|unauffällig\p{L}*|regelrecht\p{L}*|innerhalb der (?:Grenzwerte|Norm)|ausgespart|erhalten\p{L}*)(?!\p{L})/iu,
  nerves: [
    [/superficialis n\.? radialis|radialis superficialis/gi, 'superficial-radial'], [/fibularis superficialis|peron(?:a|)eus superficialis/gi, 'superficial-fibular'], [/dorsalis n\.? ulnaris/gi, 'dorsal-ulnar'],
    [/antebrachii lateralis/gi, 'lateral-antebrachial'], [/antebrachii medialis/gi, 'medial-antebrachial'], [/plantaris medialis/gi, 'medial-plantar'], [/plantaris lateralis/gi, 'lateral-plantar'],
    [/medianus|karpaltunnel|carpaltunnel/gi, 'median'], [/ulnaris|kubitaltunnel|ulnarisrinne/gi, 'ulnar'], [/musculocutaneus/gi, 'musculocutaneous'], [/radialis|fallhand/gi, 'radial'], [/axillaris/gi, 'axillary'], [/suprascapularis/gi, 'suprascapular'],
    [/accessorius/gi, 'accessory'], [/facialis|fazialis/gi, 'facial'], [/trigeminus/gi, 'trigeminal'], [/fibularis|peron(?:a|)eus|fallfuß|fußheber/gi, 'fibular'], [/tibialis|tarsaltunnel/gi, 'tibial'], [/suralis/gi, 'sural'], [/femoralis/gi, 'femoral'],
    [/saphenus/gi, 'saphenous'], [/ischiadicus/gi, 'sciatic'], [/obturatorius/gi, 'obturator'],
  ],
}

const languages: Record<ReportLanguage, readonly SideWords[]> = { en: [english], de: [german, english] }

/** The languages whose words are looked for in a report: its own, and English, which a reader may fall into. None where there is no list. */
export const sideWordsOf = (language: string): readonly SideWords[] => isReportLanguage(language) ? languages[language] : []
