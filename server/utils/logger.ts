import pino, { type DestinationStream, type Logger } from 'pino'

/**
 * Field names whose values never reach the log, at the top and one level down. The rule is to log ids, codes and counts
 * only; this is the net beneath it. tests/server/logger.test.ts holds it.
 */
const redacted = ['password', 'currentPassword', 'newPassword', 'code', 'token', 'secret', 'cookie', 'authorization', 'email', 'toAddress', 'address', 'phone', 'name', 'familyName', 'givenName', 'birthDate',
  'printedName', 'identifier', 'body', 'query', 'headers', 'data', 'words', 'search', 'text', 'passphrase', 'stack', 'sql', 'parameters']

/** JSON lines: JSON escapes line breaks and control characters, so no value can forge an entry. */
export function makeLogger(level = 'info', destination?: DestinationStream): Logger {
  return pino({
    level,
    base: undefined,
    timestamp: pino.stdTimeFunctions.isoTime,
    formatters: { level: label => ({ level: label }) },
    redact: { paths: redacted.flatMap(field => [field, `*.${field}`]).filter(path => path !== 'code'), censor: '[left out]' },
    serializers: { err: errorForLog, error: errorForLog },
  }, destination ?? pino.destination({ fd: 1, sync: false }))
}

/**
 * An error as the log may hold it: its class, its code and where in our code it arose. The message is left out, since
 * a library's message can quote a value.
 */
export function errorForLog(error: unknown): object {
  if (!(error instanceof Error)) return { kind: typeof error }
  const where = error.stack?.split('\n').filter(line => /^\s+at /.test(line)).slice(0, 6).map(line => line.trim().replace(/\(?(?:file:\/\/)?\/.*\/(?=[^/]+:\d+:\d+)/, '(')) ?? []
  return { kind: error.name, errorCode: (error as { code?: unknown }).code ?? null, where }
}
