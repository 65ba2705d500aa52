/** The window itself, seen through the browser's debugging port: what is drawn, and pictures for people to look at. */
import * as assert from 'node:assert'
import { mkdirSync } from 'node:fs'
import { join } from 'node:path'
import type { Browser, Page } from 'playwright-core'

/** A picture that still changes after this many looks never comes to rest. */
const LOOKS = 20

export class Window {
  private constructor(
    private readonly browser: Browser,
    readonly page: Page,
    private readonly folder: string,
  ) {}

  /** Undefined where the editor does not run in a browser that can be asked. */
  static async connect(): Promise<Window | undefined> {
    const { WORKBENCH_CDP: address, WORKBENCH_PICTURES: folder } = process.env
    if (!address || !folder) return undefined
    const { chromium } = await import('playwright-core')
    const browser = await chromium.connectOverCDP(address)
    const [page] = browser.contexts().flatMap(context => context.pages())
    mkdirSync(folder, { recursive: true })
    return new Window(browser, page, folder)
  }

  /** Shoots until two pictures in a row agree: then the picture is the same in each run. */
  async picture(name: string): Promise<void> {
    const path = join(this.folder, `${name}.png`)
    const shoot = async () => {
      const image = await this.page.screenshot({ path, animations: 'disabled', caret: 'hide', scale: 'css' })
      return image.toString('base64')
    }
    let last = await shoot()
    for (let look = 0; look < LOOKS; look++) {
      const next = await shoot()
      if (next === last) return
      last = next
    }
    assert.fail(`${name} never comes to rest`)
  }

  /** What the editor draws, piece by piece, with the colour of each. */
  drawn(): Promise<{ text: string; colour: string }[]> {
    return this.page.evaluate(() =>
      [...document.querySelectorAll('.editor-instance .view-line > span > span')].map(span => ({
        text: (span.textContent ?? '').replaceAll('\u00a0', ' ').trim(),
        colour: getComputedStyle(span).color,
      })),
    )
  }

  /** Puts fingers on the window, moves them, lifts them. */
  async fingers(): Promise<
    (
      type: 'touchStart' | 'touchMove' | 'touchEnd',
      ...at: (readonly [x: number, y: number])[]
    ) => Promise<void>
  > {
    const session = await this.page.context().newCDPSession(this.page)
    return async (type, ...at) => {
      const touchPoints = at.map(([x, y], id) => ({ x, y, id }))
      await session.send('Input.dispatchTouchEvent', { type, touchPoints })
    }
  }

  async close(): Promise<void> {
    await this.browser.close()
  }
}
