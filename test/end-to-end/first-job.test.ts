// The first job, as a person does it in a browser: the sample opens, a statement is edited, another link is chosen on the strip, a dial is
// dragged, all of it is undone; what is there survives closing the window, goes out as a file and comes back from it. The console stays
// empty, the policy blocks nothing, and axe finds nothing to say.

import { readFile } from "node:fs/promises"
import { createRequire } from "node:module"
import { join } from "node:path"
import type { Page } from "playwright-core"
import { describe, expect, it } from "vitest"
import { running, windowAt } from "./served.ts"

const own = running()

const rowOf = (page: Page, kind: string, nth = 0) => page.locator(`etamu-row.kind-${kind}`).nth(nth)

/** The state of a row in words. */
const stateOf = async (page: Page, kind: string, nth = 0): Promise<string> =>
  (await rowOf(page, kind, nth).getAttribute("aria-label")) ?? ""

const isReady = (page: Page, kind: string, nth = 0) => expect.poll(() => stateOf(page, kind, nth), { timeout: 20_000 }).toMatch(/: ready/)

/** The statement of a row that stands still. */
const statementOf = async (page: Page, kind: string, nth = 0): Promise<string> =>
  (await rowOf(page, kind, nth).locator(".statement .line").allTextContents()).join("\n")

const savedAt = (page: Page) =>
  expect.poll(() => page.locator("span.saved").textContent(), { timeout: 10_000 }).toMatch(/^saved and read back \d\d:\d\d$/)

/** What axe finds wrong, one line each. */
async function faultsByAxe(page: Page): Promise<readonly string[]> {
  await page.evaluate(await readFile(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8"))
  return page.evaluate(async () => {
    const { axe } = globalThis as unknown as {
      axe: { run(): Promise<{ violations: { id: string; nodes: { html: string; failureSummary: string }[] }[] }> }
    }
    const { violations } = await axe.run()
    return violations.flatMap(({ id, nodes }) => nodes.map(({ html, failureSummary }) => `${id}: ${html.slice(0, 160)} ${failureSummary}`))
  })
}

describe("the first job", () => {
  it("goes from the sample through edits, a strip, a dial, undo, a file and back", async () => {
    const context = await own.browser.newContext({ viewport: { width: 1440, height: 900 }, acceptDownloads: true })
    const { page, wrong } = await windowAt(context, own.server.address)

    // The sample opens and every cell comes to a finding.
    expect(await page.locator("input.title").inputValue()).toBe("How many cells spoil a bottle?")
    await isReady(page, "scales")
    await isReady(page, "note", 1)
    await expect.poll(() => page.locator("etamu-row.form-ready").count(), { timeout: 20_000 }).toBe(await page.locator("etamu-row").count())
    expect(await faultsByAxe(page)).toEqual([])

    // A statement is edited by keyboard; the fault is said where it stands, and the last good finding stays.
    await rowOf(page, "model").locator(".statement").focus()
    await page.keyboard.press("Enter")
    await expect.poll(() => page.locator("etamu-row.editing").count()).toBe(1)
    await page.keyboard.type("s")
    await expect.poll(() => stateOf(page, "model")).toContain("fault")
    await expect.poll(() => rowOf(page, "model").locator(".saying .notices").textContent()).toContain("strengths")
    expect(await stateOf(page, "model")).toContain("out of date")
    expect(await stateOf(page, "scales")).toContain("waits for spoil")
    await page.keyboard.press("Backspace")
    await isReady(page, "model")
    await page.keyboard.press("Escape")
    await expect.poll(() => page.evaluate(() => document.activeElement?.className)).toBe("statement")

    // Another link is chosen on the strip: the model's text is written to, and all that reads it follows.
    const risk = () => rowOf(page, "value").locator("etamu-block p").first().textContent()
    const underCloglog = await risk()
    await rowOf(page, "scales")
      .getByRole("button", { name: /probit/ })
      .first()
      .click()
    await expect.poll(() => statementOf(page, "model")).toContain("link probit")
    await expect.poll(risk, { timeout: 20_000 }).not.toBe(underCloglog)
    await isReady(page, "scales")

    // A dial is dragged: the scales follow, and the drag is one step of undo.
    const dial = rowOf(page, "dial").locator("etamu-dial input[type=range], etamu-dial [role=slider]").first()
    const box = await dial.boundingBox()
    if (box === null) throw new Error("The dial is on the page.")
    await page.mouse.move(box.x + 8, box.y + box.height / 2)
    await page.mouse.down()
    for (let i = 1; i <= 12; i++) await page.mouse.move(box.x + 8 + (i * box.width) / 24, box.y + box.height / 2)
    await page.mouse.up()
    await expect.poll(() => statementOf(page, "dial")).not.toContain("start -1")
    const dragged = await statementOf(page, "dial")
    await isReady(page, "scales")

    // Undo takes back the drag as a whole, then the link; redo brings the link again.
    await page.getByRole("button", { name: "Undo" }).click()
    await expect.poll(() => statementOf(page, "dial")).toContain("start -1")
    await page.getByRole("button", { name: "Redo" }).click()
    await expect.poll(() => statementOf(page, "dial")).toBe(dragged)
    await page.keyboard.press("Control+z")
    await page.keyboard.press("Control+z")
    await expect.poll(() => statementOf(page, "model")).toContain("link cloglog")
    await expect.poll(risk, { timeout: 20_000 }).toBe(underCloglog)
    await page.keyboard.press("Control+y")
    await expect.poll(() => statementOf(page, "model")).toContain("link probit")
    await isReady(page, "scales")

    // It is named, saved as one goes, and there again after loading the page anew.
    await page.locator("input.title").fill("Bottles, with another link")
    await page.locator("input.title").press("Enter")
    await savedAt(page)
    await page.reload()
    await page.waitForSelector("etamu-row")
    expect(await page.locator("input.title").inputValue()).toBe("Bottles, with another link")
    expect(await statementOf(page, "model")).toContain("link probit")
    await isReady(page, "scales")

    // Handed over as a file; in a browser that knows nothing of it, the file opens to the same.
    await expect.poll(() => page.locator("etamu-row.form-ready").count(), { timeout: 20_000 }).toBe(await page.locator("etamu-row").count())
    const shown = await risk()
    const coming = page.waitForEvent("download")
    await page.getByRole("button", { name: "Hand over" }).click()
    const download = await coming
    expect(download.suggestedFilename()).toBe("Bottles-with-another-link.etamu")
    const file = join(own.folder, download.suggestedFilename())
    await download.saveAs(file)
    expect(wrong).toEqual([])
    await context.close()

    const other = await own.browser.newContext({ viewport: { width: 1024, height: 768 } })
    const second = await windowAt(other, own.server.address)
    const choosing = second.page.waitForEvent("filechooser")
    await second.page.getByRole("button", { name: "Open" }).click()
    await (await choosing).setFiles(file)
    await expect.poll(() => second.page.locator("input.title").inputValue()).toBe("Bottles, with another link")
    expect(await statementOf(second.page, "model")).toContain("link probit")
    await isReady(second.page, "value")
    await expect.poll(() => rowOf(second.page, "value").locator("etamu-block p").first().textContent(), { timeout: 20_000 }).toBe(shown)
    expect(second.wrong).toEqual([])
    await other.close()
  })

  it("brings in a file of one's own: enclosed, read, and a cell proposed that can be looked over", async () => {
    const context = await own.browser.newContext({ viewport: { width: 1440, height: 900 } })
    const { page, wrong } = await windowAt(context, own.server.address)
    await page.getByRole("button", { name: "Shelf" }).click()
    await page.getByRole("button", { name: "Begin a new notebook" }).click()
    await expect.poll(() => page.locator("etamu-row").count()).toBe(0)
    const csv = "dose;killed;n;lot\n1,5;2;30;007\n2,5;9;30;008\n3,5;21;30;007\n4,5;28;30;008\n"
    await page.evaluate((text) => {
      const transfer = new DataTransfer()
      transfer.items.add(new File([text], "trial.csv", { type: "text/csv" }))
      dispatchEvent(new DragEvent("drop", { dataTransfer: transfer, bubbles: true, cancelable: true }))
    }, csv)
    await isReady(page, "data")
    await page.keyboard.press("Escape")
    const text = await statementOf(page, "data")
    expect(text).toContain('from "trial.csv"')
    expect(text).toContain('separator ";"')
    expect(text).toContain('decimal ","')
    expect(text).toContain("column dose number")

    // From there by keyboard alone: a model, its clauses completed.
    await page.keyboard.press("Alt+n")
    await page.getByRole("menuitem", { name: /^model/ }).press("Enter")
    await expect.poll(() => page.locator("etamu-row.editing").count()).toBe(1)
    await page.keyboard.type("response killed out of n\nfamily binomial\nlink logit\npredictor dose")
    await page.keyboard.press("Escape")
    await page.keyboard.press("Escape")
    await isReady(page, "model")
    expect(await statementOf(page, "model")).toContain("data trial")
    await page.keyboard.press("Alt+n")
    await page.getByRole("menuitem", { name: /^scales/ }).press("Enter")
    await expect.poll(() => page.locator("etamu-row.editing.kind-scales").count()).toBe(1)
    await page.keyboard.type("across dose")
    await page.keyboard.press("Escape")
    await page.keyboard.press("Escape")
    await isReady(page, "scales")
    expect(await page.locator("etamu-scales").count()).toBe(1)
    await savedAt(page)
    expect(await faultsByAxe(page)).toEqual([])
    expect(wrong).toEqual([])
    await context.close()
  })

  it("lets one tab write and a second read, which writes when the first is gone", async () => {
    const context = await own.browser.newContext({ viewport: { width: 1440, height: 900 } })
    const first = await windowAt(context, own.server.address)
    await savedAt(first.page)
    const second = await windowAt(context, own.server.address)
    await expect.poll(() => second.page.locator("div.band").textContent()).toContain("open in another tab")
    expect(await second.page.locator("span.saved").textContent()).toBe("read only: another tab writes")
    await rowOf(first.page, "dial").locator(".statement").focus()
    await first.page.keyboard.press("Alt+o")
    await expect.poll(() => statementOf(first.page, "dial")).toContain("off dial")
    await savedAt(first.page)
    await first.page.close()
    await expect.poll(() => second.page.locator("div.band").textContent(), { timeout: 10_000 }).toContain("writes from here on")
    await expect.poll(() => statementOf(second.page, "dial")).toContain("off dial")
    await second.page.getByRole("button", { name: "Shelf" }).click()
    await second.page.keyboard.press("Escape")
    await rowOf(second.page, "dial").locator(".statement").focus()
    await second.page.keyboard.press("Alt+o")
    await expect.poll(() => statementOf(second.page, "dial")).not.toContain("off")
    expect([...first.wrong, ...second.wrong]).toEqual([])
    await context.close()
  })
})
