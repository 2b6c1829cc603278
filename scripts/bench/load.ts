import { Agent, request } from 'node:http'
import { performance } from 'node:perf_hooks'
import { percentile } from './measure'

export interface Target { origin: string, path: string, cookie?: string }
export interface Load { perSecond: number, medianMs: number, p99Ms: number, requests: number }

/** One GET over a kept connection; reads the whole answer. */
function get(agent: Agent, { origin, path, cookie }: Target): Promise<{ status: number, body: Buffer }> {
  return new Promise((resolve, reject) => {
    const asked = request(`${origin}${path}`, { agent, headers: cookie ? { cookie } : {} }, (response) => {
      const chunks: Buffer[] = []
      response.on('data', (chunk: Buffer) => chunks.push(chunk))
      response.on('end', () => resolve({ status: response.statusCode ?? 0, body: Buffer.concat(chunks) }))
      response.on('error', reject)
    })
    asked.setTimeout(60_000, () => asked.destroy(new Error('No answer within a minute.')))
    asked.on('error', reject)
    asked.end()
  })
}

/** @throws when the answer is not what the measurement is about */
export async function getOnce(target: Target): Promise<Buffer> {
  const agent = new Agent()
  const { status, body } = await get(agent, target).finally(() => agent.destroy())
  if (status !== 200) throw new Error(`${target.path} answered ${status}.`)
  return body
}

export interface LoadOptions { connections?: number, pauseMs?: number, until: (elapsedMs: number) => boolean }

/**
 * Asks over so many kept connections, each again as soon as it was answered (or after a pause), in turn from the list.
 * @throws when an answer is not 200: a refusal is quick and would look good
 */
export async function load(targets: readonly Target[], { connections = 10, pauseMs = 0, until }: LoadOptions): Promise<Load> {
  const agent = new Agent({ keepAlive: true, maxSockets: connections })
  const times: number[] = []
  const from = performance.now()
  const one = async (first: number) => {
    for (let turn = first; !until(performance.now() - from); turn++) {
      const target = targets[turn % targets.length]!
      const asked = performance.now()
      const { status } = await get(agent, target)
      if (status !== 200) throw new Error(`${target.path} answered ${status} under load.`)
      times.push(performance.now() - asked)
      if (pauseMs > 0) await new Promise(resolve => setTimeout(resolve, pauseMs))
    }
  }
  try {
    await Promise.all(Array.from({ length: connections }, (_, index) => one(index)))
  }
  finally {
    agent.destroy()
  }
  const seconds = (performance.now() - from) / 1000
  return { perSecond: times.length / seconds, medianMs: percentile(times, 0.5), p99Ms: percentile(times, 0.99), requests: times.length }
}

/** Milliseconds that one answer takes of the server while ten connections ask without a pause. */
export async function answerTime(target: Target, forMs: number): Promise<number> {
  const { perSecond } = await load([target], { until: elapsed => elapsed >= forMs })
  return 1000 / perSecond
}
