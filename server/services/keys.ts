import { createCipheriv, createDecipheriv, createHmac, hkdfSync, randomBytes } from 'node:crypto'
import { existsSync, mkdirSync, readFileSync, statSync, writeFileSync } from 'node:fs'
import { dirname } from 'node:path'

/**
 * Everything secret comes from one file of 32 random bytes that lies outside the data folder and its backups.
 * Each purpose has a key of its own (HKDF with SHA-256, RFC 5869); sealing is AES-256-GCM with a fresh 96-bit nonce
 * (NIST SP 800-38D, section 8.2.2). Both citations are from memory.
 */
export interface Keys {
  /** HMAC-SHA-256 of one link of the audit chain, hex. */
  auditMac(text: string): string
  /** The same for the chain of views, under a key of its own. */
  viewMac(text: string): string
  seal(text: string): string
  /** @throws when the text was altered or sealed under another key */
  unseal(sealed: string): string
  sealBytes(bytes: Uint8Array): Buffer
  unsealBytes(sealed: Uint8Array): Buffer
  /** The keys of both chains, to check them in a thread of this process; they go nowhere else. */
  chainKeys: ChainKeys
  /** 32 bytes for what one person's browser keeps on one device until the server has it. */
  offlineKey(userId: string, deviceId: string): Buffer
  /** Encrypts the session cookie. */
  authSecret: string
  /** What is stored in place of a token, a session id or a recovery code. */
  tokenHash(token: string): string
}

/** Base64. */
export interface ChainKeys { audit: string, view: string }

const mac = (key: Buffer) => (text: string) => createHmac('sha256', key).update(text, 'utf8').digest('hex')

/** What checks the links of both chains. */
export function chainMacs({ audit, view }: ChainKeys): Pick<Keys, 'auditMac' | 'viewMac'> {
  return { auditMac: mac(Buffer.from(audit, 'base64')), viewMac: mac(Buffer.from(view, 'base64')) }
}

const NONCE_BYTES = 12
const TAG_BYTES = 16

/**
 * @param mayCreate false once a database exists: a new key could open nothing in it and would break both chains
 * @throws when the file is missing, has another length, or can be read by others
 */
export function loadKeys(keyFile: string, mayCreate = true): Keys {
  if (!existsSync(keyFile)) {
    if (!mayCreate) throw new Error('The key file is missing. Restore it beside the data folder: without it nothing sealed can be opened and no audit trail can be verified.')
    mkdirSync(dirname(keyFile), { recursive: true, mode: 0o700 })
    writeFileSync(keyFile, randomBytes(32), { mode: 0o600, flag: 'wx' })
  }
  const secret = readFileSync(keyFile)
  if (secret.length !== 32) throw new Error('The key file does not hold 32 bytes. Restore the right one.')
  if (process.platform !== 'win32' && (statSync(keyFile).mode & 0o077) !== 0) throw new Error('The key file can be read by other users of this machine. Run: chmod 600 on it, then start again.')
  return keysFrom(secret)
}

/** @param secret 32 bytes */
export function keysFrom(secret: Uint8Array): Keys {
  const derive = (purpose: string) => Buffer.from(hkdfSync('sha256', secret, Buffer.alloc(0), `orthodrome/${purpose}/1`, 32))
  const chainKeys = { audit: derive('audit').toString('base64'), view: derive('view').toString('base64') }
  const sealKey = derive('seal')
  const sealBytes = (bytes: Uint8Array) => encrypt(sealKey, bytes)
  const unsealBytes = (sealed: Uint8Array) => decrypt(sealKey, sealed)
  return {
    ...chainMacs(chainKeys),
    chainKeys,
    sealBytes,
    unsealBytes,
    seal: text => sealBytes(Buffer.from(text, 'utf8')).toString('base64'),
    unseal: sealed => unsealBytes(Buffer.from(sealed, 'base64')).toString('utf8'),
    offlineKey: (userId, deviceId) => derive(`offline/${userId}/${deviceId}`),
    authSecret: derive('session').toString('base64'),
    tokenHash: mac(derive('token')),
  }
}

function encrypt(key: Buffer, bytes: Uint8Array): Buffer {
  const nonce = randomBytes(NONCE_BYTES)
  const cipher = createCipheriv('aes-256-gcm', key, nonce)
  const body = Buffer.concat([cipher.update(bytes), cipher.final()])
  return Buffer.concat([nonce, cipher.getAuthTag(), body])
}

function decrypt(key: Buffer, sealed: Uint8Array): Buffer {
  const bytes = Buffer.from(sealed)
  const decipher = createDecipheriv('aes-256-gcm', key, bytes.subarray(0, NONCE_BYTES), { authTagLength: TAG_BYTES })
  decipher.setAuthTag(bytes.subarray(NONCE_BYTES, NONCE_BYTES + TAG_BYTES))
  return Buffer.concat([decipher.update(bytes.subarray(NONCE_BYTES + TAG_BYTES)), decipher.final()])
}

/** 256 random bits for a link or a session, safe in an address. */
export function newToken(): string {
  return randomBytes(32).toString('base64url')
}
