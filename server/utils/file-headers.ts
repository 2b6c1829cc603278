/** Everything outside this is written in the extended form of RFC 8187, which cannot end the header or the quotes. */
const plain = /[^\w .()-]/g
const encoded = (name: string) => encodeURIComponent(name).replace(/['()*]/g, character => `%${character.charCodeAt(0).toString(16).toUpperCase()}`)

/**
 * Headers for bytes that somebody sent in: shown as what they were found to be, in a sandbox without scripts and without
 * the product's origin. PDF files are saved, since readers do not work in a sandbox; pictures may be shown.
 */
export function fileHeaders({ mediaType, name, byteCount }: { mediaType: string, name: string, byteCount: number }): Record<string, string> {
  const disposition = mediaType.startsWith('image/') ? 'inline' : 'attachment'
  return {
    'Content-Type': mediaType,
    'Content-Length': String(byteCount),
    'Content-Disposition': `${disposition}; filename="${name.replace(plain, '_')}"; filename*=UTF-8''${encoded(name)}`,
    'Content-Security-Policy': 'sandbox; default-src \'none\'',
    'X-Content-Type-Options': 'nosniff',
    'Cross-Origin-Resource-Policy': 'same-origin',
    'Cache-Control': 'no-store',
  }
}
