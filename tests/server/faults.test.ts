import { spawn } from 'node:child_process'
import { expect, it } from 'vitest'

/** The short form of `npm run test:faults`: five lives of the program that end by SIGKILL, twenty mails to a server that misbehaves. */
it('nothing is lost and nothing is sent twice when the program is killed and the mail server misbehaves', async () => {
  const child = spawn(process.execPath, ['scripts/run-ts.mjs', 'scripts/faults.ts', '--rounds', '5', '--mails', '20'], { stdio: ['ignore', 'pipe', 'pipe'] })
  let said = ''
  child.stdout.on('data', (chunk: Buffer) => said += String(chunk))
  child.stderr.on('data', (chunk: Buffer) => said += String(chunk))
  const code = await new Promise<number | null>(done => child.once('exit', done))
  expect(said).toContain('Everything held.')
  expect(said.match(/in order/g)).toHaveLength(2)
  expect(code).toBe(0)
}, 300_000)
