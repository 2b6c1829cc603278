import type { Page } from 'playwright-core'
import { expect } from 'vitest'

export interface Focused { name: string, tag: string, lost: boolean, ring: string, value: string }

/** What has the focus: its name as it is read out, and the outline that shows it. Only what scripts focus (tabindex -1) may go without. */
export async function focused(page: Page): Promise<Focused> {
  return await page.evaluate(() => {
    const element = document.activeElement as HTMLInputElement | null
    if (!element || element === document.body) return { name: '', tag: '', lost: true, ring: '', value: '' }
    const { outlineStyle, outlineWidth } = getComputedStyle(element)
    const seen = element.tabIndex < 0 || (outlineStyle !== 'none' && Number.parseFloat(outlineWidth) >= 2)
    const name = element.getAttribute('aria-label') ?? element.labels?.[0]?.textContent ?? element.textContent ?? ''
    return { name: name.replace(/\s+/g, ' ').trim(), tag: element.tagName.toLowerCase(), lost: false, ring: seen ? 'seen' : `${outlineStyle} ${outlineWidth}`, value: element.value ?? '' }
  })
}

/** The focus is somewhere and can be seen; returns where. */
export async function expectFocus(page: Page, name?: string | RegExp): Promise<Focused> {
  const now = await focused(page)
  expect(now, `at ${page.url()}`).toMatchObject({ lost: false, ring: 'seen' })
  if (name) expect(now.name).toMatch(name)
  return now
}

/** Presses Tab (or Shift Tab) until the named element has the focus; at each stop the focus must be seen. */
export async function tabTo(page: Page, name: RegExp, { back = false, most = 120 } = {}): Promise<void> {
  const passed: string[] = []
  for (let step = 0; step < most; step++) {
    const now = await expectFocus(page)
    if (name.test(now.name)) return
    passed.push(now.name.slice(0, 40))
    await page.keyboard.press(back ? 'Shift+Tab' : 'Tab')
  }
  throw new Error(`Tab did not lead to ${name} from "${passed[0]}"; the last stops were ${passed.slice(-5).join(' | ')}.`)
}

export async function press(page: Page, ...keys: string[]): Promise<void> {
  for (const key of keys) await page.keyboard.press(key)
}
