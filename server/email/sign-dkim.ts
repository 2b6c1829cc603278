import { createPrivateKey, type KeyObject } from 'node:crypto'
import DKIM from 'nodemailer/lib/dkim'

export interface DkimKey { domain: string, selector: string, /** PEM */ privateKey: string }

/**
 * Checks a key once, when the program starts: a wrong one would otherwise leave every mail unsigned.
 * @throws Error when it is no private RSA key of 1024 bits at least (RFC 8301, section 3.2), or the names cannot be DNS names
 */
export function checkDkimKey({ domain, selector, privateKey }: DkimKey): DkimKey {
  const name = /^[a-z0-9](?:[a-z0-9-]*[a-z0-9])?(?:\.[a-z0-9](?:[a-z0-9-]*[a-z0-9])?)*$/i
  if (!name.test(domain) || !name.test(selector)) throw new Error('DKIM_DOMAIN and DKIM_SELECTOR must be names as DNS has them.')
  let key: KeyObject
  try {
    key = createPrivateKey(privateKey)
  }
  catch {
    throw new Error('The file of DKIM_KEY_FILE holds no private key in PEM.')
  }
  if (key.asymmetricKeyType !== 'rsa' || (key.asymmetricKeyDetails?.modulusLength ?? 0) < 1024) throw new Error('DKIM_KEY_FILE must be an RSA key of 1024 bits or more.')
  return { domain, selector, privateKey }
}

/** The message with a DKIM-Signature before it (RFC 6376), over the headers that say what it is and whom it is for. */
export async function signDkim(message: Buffer, { domain, selector, privateKey }: DkimKey): Promise<Buffer> {
  const signed = new DKIM({ domainName: domain, keySelector: selector, privateKey }).sign(message)
  const chunks: Buffer[] = []
  for await (const chunk of signed) chunks.push(chunk as Buffer)
  return Buffer.concat(chunks)
}
