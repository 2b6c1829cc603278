/** What lies in the browser's database: unreadable without the key that the server holds. */
export interface Sealed { iv: Uint8Array<ArrayBuffer>, data: ArrayBuffer }

const IV_BYTES = 12

/** @param base64 32 bytes as the server gives them; the key cannot be taken out of the browser's memory again */
export async function importKey(base64: string): Promise<CryptoKey> {
  const bytes = Uint8Array.from(atob(base64), sign => sign.charCodeAt(0))
  return crypto.subtle.importKey('raw', bytes, 'AES-GCM', false, ['encrypt', 'decrypt'])
}

/**
 * AES-256-GCM with a fresh 96-bit nonce (NIST SP 800-38D, section 8.2.2; from memory). `place` is bound to the text: a
 * record that is moved to another place in the database does not open.
 */
export async function seal(key: CryptoKey, place: string, value: unknown): Promise<Sealed> {
  const iv = crypto.getRandomValues(new Uint8Array(IV_BYTES))
  const data = await crypto.subtle.encrypt({ name: 'AES-GCM', iv, additionalData: new TextEncoder().encode(place) }, key, new TextEncoder().encode(JSON.stringify(value)))
  return { iv, data }
}

/** @returns null when it was sealed under another key, for another place, or was altered */
export async function unseal<T>(key: CryptoKey, place: string, sealed: Sealed): Promise<T | null> {
  try {
    const bytes = await crypto.subtle.decrypt({ name: 'AES-GCM', iv: sealed.iv, additionalData: new TextEncoder().encode(place) }, key, sealed.data)
    return JSON.parse(new TextDecoder().decode(bytes)) as T
  }
  catch { return null }
}
