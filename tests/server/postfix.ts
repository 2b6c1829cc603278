import { spawn, spawnSync } from 'node:child_process'
import { chownSync, existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync, chmodSync } from 'node:fs'
import { createServer, type AddressInfo, connect } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'

const postfix = '/usr/sbin/postfix'
/** Why there is no real mail server here; '' when there can be one. */
export const whyNoPostfix = process.getuid?.() !== 0 ? 'it can be started by root only' : existsSync(postfix) ? '' : 'Debian\'s postfix is not installed (npm test tries to)'

const idOf = (flag: '-u' | '-g') => Number(spawnSync('id', [flag, 'postfix'], { encoding: 'utf8' }).stdout)
const wait = (ms: number) => new Promise(done => setTimeout(done, ms))

async function freePort(): Promise<number> {
  const probe = createServer()
  await new Promise<void>(resolve => probe.listen(0, '127.0.0.1', resolve))
  const { port } = probe.address() as AddressInfo
  await new Promise(resolve => probe.close(resolve))
  return port
}

/** Every service that a server without a network needs, none of them in a chroot: name, type, private, wake-up, most, program. */
const services = [
  'postlog unix-dgram n - 1 postlogd', 'pickup unix n 60 1 pickup', 'cleanup unix n - 0 cleanup', 'qmgr unix n 300 1 qmgr', 'rewrite unix - - - trivial-rewrite', 'bounce unix - - 0 bounce', 'defer unix - - 0 bounce', 'trace unix - - 0 bounce',
  'proxymap unix - - - proxymap', 'smtp unix - - - smtp', 'error unix - - - error', 'retry unix - - - error', 'virtual unix - - - virtual', 'anvil unix - - 1 anvil', 'scache unix - - 1 scache',
]
const lineOf = (service: string) => {
  const [name, type, shut, wake, most, program] = service.split(' ')
  return `${name} ${type} ${shut} ${name === 'virtual' ? 'n' : '-'} n ${wake} ${most} ${program}`
}

/**
 * A postfix of its own on the loopback, with folders of its own: it takes mail for `practice.example` into one maildir and for
 * `orthodrome.example` into another, sends nothing anywhere, and returns mail to `away@` as undeliverable at once.
 */
export async function startPostfix() {
  const dir = mkdtempSync(join(tmpdir(), 'orthodrome-postfix-'))
  chmodSync(dir, 0o755)
  const port = await freePort()
  const [uid, gid] = [idOf('-u'), idOf('-g')]
  for (const name of ['mail', 'data', 'spool']) mkdirSync(join(dir, name))
  for (const name of ['mail', 'data']) chownSync(join(dir, name), uid, gid)
  writeFileSync(join(dir, 'mailboxes'), '/^away@practice\\.example$/ away/\n/@practice\\.example$/ practice/\n/@orthodrome\\.example$/ bounces/\n')
  writeFileSync(join(dir, 'transport'), '/^away@practice\\.example$/ smtp:[127.0.0.1]:1\n')
  writeFileSync(join(dir, 'main.cf'), Object.entries({
    compatibility_level: '3.6', queue_directory: `${dir}/spool`, data_directory: `${dir}/data`, mail_owner: 'postfix', myhostname: 'mx.orthodrome.example', inet_interfaces: '127.0.0.1', inet_protocols: 'ipv4',
    mydestination: '', mynetworks: '127.0.0.0/8', alias_maps: '', alias_database: '', local_recipient_maps: '', recipient_delimiter: '+', smtputf8_enable: 'no',
    virtual_mailbox_domains: 'practice.example orthodrome.example', virtual_mailbox_base: `${dir}/mail`, virtual_mailbox_maps: `regexp:${dir}/mailboxes`, virtual_uid_maps: `static:${uid}`, virtual_gid_maps: `static:${gid}`,
    transport_maps: `regexp:${dir}/transport`, maximal_queue_lifetime: '0', bounce_queue_lifetime: '0', maillog_file_prefixes: dir, maillog_file: `${dir}/log`, default_transport: 'error:nothing leaves this machine', smtpd_relay_restrictions: 'reject_unauth_destination', disable_dns_lookups: 'yes',
  }).map(([key, value]) => `${key} = ${value}`).join('\n'))
  writeFileSync(join(dir, 'master.cf'), [`127.0.0.1:${port} inet n - n - - smtpd`, ...services.map(lineOf)].join('\n') + '\n')
  const started = spawnSync(postfix, ['-c', dir, 'start'], { encoding: 'utf8' })
  const log = () => existsSync(join(dir, 'log')) ? readFileSync(join(dir, 'log'), 'utf8') : ''
  for (let tries = 0; !await answers(port); tries++) {
    if (tries > 100) throw new Error(`postfix does not answer: ${started.stdout}${started.stderr}${log()}`)
    await wait(100)
  }
  return {
    url: `smtp://127.0.0.1:${port}`,
    log,
    /** Waits until so many mails lie in a maildir, and gives them. */
    mails: async (box: 'practice' | 'bounces', count: number): Promise<Buffer[]> => {
      const folder = join(dir, 'mail', box, 'new')
      const names = () => existsSync(folder) ? readdirSync(folder) : []
      for (let tries = 0; names().length < count; tries++) {
        if (tries > 200) throw new Error(`${names().length} of ${count} mails arrived.\n${log()}`)
        await wait(100)
      }
      return names().sort().map(name => readFileSync(join(folder, name)))
    },
    stop: async () => {
      await new Promise(done => spawn(postfix, ['-c', dir, 'stop'], { stdio: 'ignore' }).once('exit', done))
      rmSync(dir, { recursive: true, force: true })
    },
  }
}

function answers(port: number): Promise<boolean> {
  return new Promise((resolve) => {
    const socket = connect(port, '127.0.0.1')
    const end = (yes: boolean) => {
      socket.destroy()
      resolve(yes)
    }
    socket.once('data', () => end(true)).once('error', () => end(false)).setTimeout(2_000, () => end(false))
  })
}
