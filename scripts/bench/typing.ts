import { cpus, loadavg } from 'node:os'
import { chromium, type BrowserContext, type CDPSession, type Page } from 'playwright-core'
import { openServices } from '#server/utils/open-services'
import type { StudyView } from '#shared/schemas/bench'
import { quietLog } from '../settings'
import type { Clinic } from './clinic'
import { ms, percentile, type Figure } from './measure'

const RUNS = 30
const CELLS = 100
const SLOWER = 4
const FRAME_MS = 16
const techniques = ['median-motor-apb', 'ulnar-motor-adm', 'median-sensory-d2', 'ulnar-sensory-d5', 'fibular-motor-edb', 'tibial-motor-ah', 'sural', 'superficial-fibular', 'radial-motor-eip', 'median-f-apb', 'ulnar-f-adm', 'tibial-f-ah', 'radial-sensory-snuffbox', 'median-mixed-palm', 'ulnar-mixed-palm']
/** Plausible values by the name of the column; what has no entry is passed over with Tab. */
const values: Record<string, string[]> = { latency: ['3.4', '7.9', '8.8'], amplitude: ['8.2', '7.8', '7.5'], duration: ['5.5'], distance: ['80', '220'], onset: ['2.9'], peak: ['3.6'] }

interface TraceEvent { name: string, ph: string, pid: number, tid: number, ts: number, dur?: number, tdur?: number, args?: { name?: string, data?: { type?: string } } }
/** What a task was for: it drew a frame, or answered a key, or something else. */
type Kind = 'frames' | 'keys' | 'others'
interface Task { ms: number, kind: Kind }

/** A study that is being recorded where the neurologist works, with thirty runs. */
async function studyToType(clinic: Clinic, context: BrowserContext): Promise<string> {
  const services = await openServices(clinic.settings, clinic.keyFile, quietLog)
  const ids = await services.db.selectFrom('study').select('id').where('state', '=', 'recording').execute().finally(() => services.db.destroy())
  const view = async (id: string) => await (await context.request.get(`${clinic.origin}/api/studies/${id}`)).json() as StudyView
  for (const { id } of ids) {
    const study = await view(id).catch(() => undefined)
    if (!study?.mayRecord) continue
    const missing = techniques.flatMap(technique => (['right', 'left'] as const).map(side => ({ technique, side }))).filter(({ technique, side }) => !study.study.runs.some(run => run.technique === technique && run.side === side))
    for (const run of missing.slice(0, Math.max(0, RUNS - study.study.runs.length))) await context.request.post(`${clinic.origin}/api/studies/${id}/runs`, { data: run })
    return id
  }
  throw new Error('No study is being recorded.')
}

/** Types from cell to cell as a person does, without waiting for anything. */
async function typeCells(page: Page): Promise<void> {
  await page.locator('[data-cell]').first().focus()
  for (let typed = 0, passed = 0; typed < CELLS && passed < 4 * CELLS; passed++) {
    const label = await page.evaluate(() => document.activeElement?.getAttribute('aria-label') ?? '')
    const texts = Object.entries(values).find(([column]) => label.includes(`, ${column},`))?.[1]
    if (texts) await page.keyboard.type(texts[typed++ % texts.length]!, { delay: 40 })
    await page.keyboard.press('Tab')
    await page.waitForTimeout(60)
  }
}

/**
 * Processor time of each task of the page's own thread while something is done, in ms: what others do on the machine counts
 * less. The pauses of a slowed processor are counted: a loop of 38 ms took 73 to 82 at twice, 152 to 179 at four times as slow.
 */
async function tasksWhile(cdp: CDPSession, act: () => Promise<void>): Promise<Task[]> {
  const events: TraceEvent[] = []
  cdp.on('Tracing.dataCollected', ({ value }) => events.push(...value as unknown as TraceEvent[]))
  await cdp.send('Tracing.start', { transferMode: 'ReportEvents', traceConfig: { includedCategories: ['devtools.timeline', 'toplevel'] } })
  await act()
  const complete = new Promise(done => cdp.once('Tracing.tracingComplete', done))
  await cdp.send('Tracing.end')
  await complete
  const key = events.find(event => event.name === 'EventDispatch' && event.args?.data?.type === 'keydown')
  return tasksOf(events.filter(event => event.ph === 'X' && event.pid === key?.pid && event.tid === key?.tid))
}

function tasksOf(events: TraceEvent[]): Task[] {
  const signs = events.filter(event => event.name === 'Layerize' || event.name === 'EventDispatch').sort((a, b) => a.ts - b.ts)
  let next = 0
  return events.filter(event => event.name === 'ThreadControllerImpl::RunTask').sort((a, b) => a.ts - b.ts).map((task) => {
    const names = new Set<string>()
    for (; next < signs.length && signs[next]!.ts < task.ts + (task.dur ?? 0); next++) names.add(signs[next]!.name)
    return { ms: (task.tdur ?? task.dur ?? 0) / 1000, kind: names.has('Layerize') ? 'frames' : names.size > 0 ? 'keys' : 'others' }
  })
}

/** @example kindsOf(tasks) // => '71 frames, 12 keys, 1 others' */
function kindsOf(tasks: readonly Task[]): string {
  return (['frames', 'keys', 'others'] as const).map(kind => `${tasks.filter(task => task.kind === kind).length} ${kind}`).join(', ')
}

/** Four hundred fields of HTML and nothing else, no script and no style: what the browser itself needs on this machine. */
const bareFields = `<!doctype html><title>Bare fields</title>${'<input data-cell aria-label="x, latency, y">'.repeat(400)}`

async function typeInto(page: Page, cdp: CDPSession, address: string): Promise<Task[]> {
  await page.goto(address)
  await page.waitForLoadState('networkidle')
  await cdp.send('Emulation.setCPUThrottlingRate', { rate: SLOWER })
  return await tasksWhile(cdp, () => typeCells(page))
}

const longest = (tasks: readonly Task[]) => Math.max(...tasks.map(task => task.ms))
const most = (tasks: readonly Task[]) => percentile(tasks.map(task => task.ms), 0.99)
const overFrame = (tasks: readonly Task[]) => tasks.filter(task => task.ms > FRAME_MS)

/**
 * A hundred cells typed into a study of thirty runs with a slowed processor, beside the same keys in a page of bare fields:
 * a frame has 16 ms, and the browser alone needs more now and then, so what counts is how near the page comes to it.
 */
export async function typingFigures(clinic: Clinic): Promise<Figure[]> {
  const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium', args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking'] })
  try {
    const context = await browser.newContext({ viewport: { width: 1280, height: 900 } })
    const [name = '', value = ''] = clinic.cookies.neurologist.split(/=(.*)/s)
    await context.addCookies([{ name, value, url: clinic.origin }])
    const id = await studyToType(clinic, context)
    const page = await context.newPage()
    const cdp = await context.newCDPSession(page)
    const tasks = await typeInto(page, cdp, `${clinic.origin}/bench/${id}`)
    await page.route('**/bare-fields', route => route.fulfill({ contentType: 'text/html', body: bareFields }))
    const bare = await typeInto(page, cdp, `${clinic.origin}/bare-fields`)
    const load = `load ${loadavg()[0]?.toFixed(1)} on ${cpus().length} processors`
    const [over, bareOver] = [overFrame(tasks), overFrame(bare)]
    return [
      { what: `Typing ${CELLS} cells into ${RUNS} runs, processor ${SLOWER} times slower: tasks over ${FRAME_MS} ms (${kindsOf(over)}; ${load})`, value: `${over.length} of ${tasks.length}`, partner: `bare fields, ${bareOver.length} of ${bare.length}`, ratio: over.length / Math.max(1, bareOver.length), goal: 1 },
      { what: 'The same, 99 of 100 tasks at or below', value: ms(most(tasks)), partner: `bare fields, ${ms(most(bare))}`, ratio: most(tasks) / most(bare), goal: 1 },
      { what: 'The same, the longest', value: ms(longest(tasks)), partner: `bare fields, ${ms(longest(bare))}`, ratio: longest(tasks) / longest(bare) },
    ]
  }
  finally {
    await browser.close()
  }
}
