import { CsvError, parse } from 'csv-parse/sync'

export interface CsvLines { columns: string[], records: Partial<Record<string, string>>[] }

/** The head decides, so that a decimal comma in a line stays one. */
function separatorOf(text: string): string {
  const head = text.split(/\r?\n/, 1)[0] ?? ''
  return ['\t', ';'].find(sign => head.includes(sign)) ?? ','
}

/**
 * The lines of a CSV, TSV or semicolon file by the names of its head, in small letters; blank lines are left out.
 * @returns the lines, or the line at which the file is broken (null when that is not known)
 * @example csvLines('a;b\n1;2,5') // => { columns: ['a', 'b'], records: [{ a: '1', b: '2,5' }] }
 */
export function csvLines(text: string): CsvLines | { brokenAt: number | null } {
  let columns: string[] = []
  try {
    const records = parse(text, {
      bom: true, delimiter: separatorOf(text), skip_empty_lines: true, skip_records_with_empty_values: true, trim: true,
      columns: (head: string[]) => columns = head.map(name => name.trim().toLowerCase()),
    }) as CsvLines['records']
    return { columns, records }
  }
  catch (error) {
    if (!(error instanceof CsvError)) throw error
    return { brokenAt: 'lines' in error && typeof error.lines === 'number' ? error.lines : null }
  }
}
