/**
 * Rows as a comma-separated file for a spreadsheet. A cell that a spreadsheet would take for a formula gets an
 * apostrophe in front.
 *
 * @example toCsv(['name'], [['=1+1']]) // => 'name\r\n\'=1+1\r\n'
 */
export function toCsv(head: readonly string[], rows: readonly (readonly string[])[]): string {
  return [head, ...rows].map(row => row.map(csvCell).join(',') + '\r\n').join('')
}

function csvCell(text: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) && !/^-?\d+(\.\d+)?$/.test(text) ? `'${text}` : text
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe
}

/** Hands a text to the browser as a file. */
export function downloadText(name: string, text: string, mediaType = 'text/csv;charset=utf-8') {
  const url = URL.createObjectURL(new Blob(['\uFEFF', text], { type: mediaType }))
  const link = Object.assign(document.createElement('a'), { href: url, download: name })
  link.click()
  URL.revokeObjectURL(url)
}
