import { describe, expect, it } from 'vitest'
import { makeLogger } from '#server/utils/logger'

function logged(write: (log: ReturnType<typeof makeLogger>) => void): string {
  let text = ''
  write(makeLogger('info', { write: line => void (text += line) }))
  return text
}

describe('the log', () => {
  it.each(['password', 'token', 'cookie', 'email', 'toAddress', 'familyName', 'givenName', 'birthDate', 'body', 'query', 'words', 'passphrase', 'secret'])('never shows %s, at the top or one level down', (field) => {
    const text = logged(log => log.info({ [field]: 'Invented Value', inner: { [field]: 'Invented Value' } }, 'something'))
    expect(text).not.toContain('Invented Value')
    expect(text).toContain('something')
  })
  it('shows of an error its class, code and place, not its message and no path of the machine', () => {
    const error = Object.assign(new Error('UNIQUE failed: patient Invented Person'), { code: 'SQLITE_CONSTRAINT' })
    const text = logged(log => log.error({ err: error }, 'failed'))
    expect(text).toContain('SQLITE_CONSTRAINT')
    expect(text).toContain('logger.test.ts')
    expect(text).not.toContain('Invented Person')
    expect(text).not.toContain(process.cwd())
  })
  it('writes one line per entry whatever a value holds', () => {
    const text = logged(log => log.info({ route: 'a\n{"level":"error","msg":"forged"}' }, 'one'))
    expect(text.trim().split('\n')).toHaveLength(1)
  })
})
