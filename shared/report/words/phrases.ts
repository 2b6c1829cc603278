/**
 * A form of a phrase: captured parts are given in the language before they are put in place. `typed`: all parts,
 * and `typed-last`: the last one, were typed by a person and stay as they are.
 */
export type Phrase = readonly [form: RegExp, say: (...parts: string[]) => string, kept?: 'typed' | 'typed-last']

/**
 * Gives phrases of the calculation library in another language: first as a whole, then by their form, part by part. What
 * is not known stays in English, which can be read and asked about; the tests walk the whole catalogue so that nothing
 * usual is left.
 *
 * @example phrasesOf({ wrist: 'Handgelenk' }, [[/^latency at (.+)$/, site => `Latenz, ${site}`]])('latency at wrist') // => 'Latenz, Handgelenk'
 */
export function phrasesOf(terms: Readonly<Record<string, string>>, phrases: readonly Phrase[]): (text: string) => string {
  const known = new Map(Object.entries(terms))
  const made = new Map<string, string>()
  function say(text: string): string {
    const term = known.get(text) ?? made.get(text)
    if (term !== undefined) return term
    const found = byForm(text)
    if (made.size < 5_000) made.set(text, found)
    return found
  }
  function byForm(text: string): string {
    for (const [form, inLanguage, kept] of phrases) {
      const parts = form.exec(text)?.slice(1)
      if (parts) return inLanguage(...parts.map((part, index) => kept === 'typed' || (kept && index === parts.length - 1) ? part ?? '' : say(part ?? '')))
    }
    return text
  }
  return say
}
