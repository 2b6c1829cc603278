/**
 * What a person typed into a search field, turned into what the register is searched for:
 * words with accents and case folded, and birth dates in several spellings.
 */
const lettersWithoutAccent: Record<string, string> = { ł: 'l', ø: 'o', đ: 'd', ð: 'd', þ: 'th', ß: 'ss', æ: 'ae', œ: 'oe', ı: 'i' }

/** @example foldWords("Łukaszewicz-O'Neill") // => 'lukaszewicz oneill' */
export function foldWords(text: string): string {
  return text.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase()
    .replace(/[łøđðþßæœı]/g, letter => lettersWithoutAccent[letter] ?? letter)
    .replace(/['’]/g, '').replace(/[^\p{L}\p{N}]+/gu, ' ').trim()
}

const months = ['january', 'february', 'march', 'april', 'may', 'june', 'july', 'august', 'september', 'october', 'november', 'december']
const monthOf = (word: string) => 1 + months.findIndex(month => word.length >= 3 && month.startsWith(word.toLowerCase()))

function isoDate(year: string, month: number, day: number): string[] {
  const text = `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`
  const date = new Date(`${text}T00:00:00Z`)
  return !Number.isNaN(date.getTime()) && date.toISOString().startsWith(text) ? [text] : []
}

/** Day first and month first are both looked for where both are possible: 3/9/1974. */
const spellings: [RegExp, (m: string[]) => string[]][] = [
  [/\b(\d{4})[-/. ](\d{1,2})[-/. ](\d{1,2})\b/, m => isoDate(m[1]!, Number(m[2]), Number(m[3]))],
  [/\b(\d{1,2})[-/.] ?(\d{1,2})[-/.] ?(\d{4})\b/, m => [...isoDate(m[3]!, Number(m[2]), Number(m[1])), ...isoDate(m[3]!, Number(m[1]), Number(m[2]))]],
  [/\b(\d{1,2})\.? ([A-Za-z]{3,9})\.? (\d{4})\b/, m => isoDate(m[3]!, monthOf(m[2]!), Number(m[1]))],
  [/\b(19\d{2}|20\d{2})(\d{2})(\d{2})\b/, m => isoDate(m[1]!, Number(m[2]), Number(m[3]))],
]

export interface PatientWords { /** FTS5 expression, or null when no word is left */ match: string | null, birthDates: string[] }

/**
 * @example
 * patientWords('novak 14.3.1974') // => { match: '"novak"*', birthDates: ['1974-03-14'] }
 */
export function patientWords(search: string): PatientWords {
  for (const [pattern, dates] of spellings) {
    const found = pattern.exec(search)
    const birthDates = found ? [...new Set(dates(found))] : []
    if (found && birthDates.length) return { match: matchOf(search.replace(found[0], ' ')), birthDates }
  }
  return { match: matchOf(search), birthDates: [] }
}

/** Every word must begin some word of the record: quoted, so that no operator of the search language gets through. */
function matchOf(text: string): string | null {
  const words = foldWords(text).split(' ').filter(Boolean).slice(0, 12)
  return words.length ? words.map(word => `"${word}"*`).join(' ') : null
}
