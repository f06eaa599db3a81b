// The whole job by keyboard alone: no pointer is used from the first page to the notebook that is opened again. Files are handed to the
// browser's own dialog, which is no part of the page.

import { writeFile } from "node:fs/promises"
import { join } from "node:path"
import type { Page } from "playwright-core"
import { describe, expect, it } from "vitest"
import { running, windowAt } from "./served.ts"

const own = running()

/** What has the focus, through all shadow roots, as a person would be told: its role and name. */
const focused = (page: Page): Promise<string> =>
  page.evaluate(() => {
    let at = document.activeElement
    while (at?.shadowRoot?.activeElement) at = at.shadowRoot.activeElement
    const says = at?.getAttribute("aria-label") ?? at?.textContent?.trim().replace(/\s+/g, " ") ?? ""
    return `${at?.getAttribute("role") ?? at?.tagName.toLowerCase()}: ${says}`
  })

/** Presses a key until the focus is on what is looked for. */
async function goTo(page: Page, key: string, what: RegExp, most = 60): Promise<void> {
  for (let i = 0; i < most; i++) {
    if (what.test(await focused(page))) return
    await page.keyboard.press(key)
  }
  throw new Error(`${what} was not reached by ${key}; the focus is on ${await focused(page)}.`)
}

/** Whether the focus can be seen: an outline, or a rule of the page that stands for one. */
const ringed = (page: Page): Promise<boolean> =>
  page.evaluate(() => {
    let at = document.activeElement
    while (at?.shadowRoot?.activeElement) at = at.shadowRoot.activeElement
    if (at === null || at === document.body) return false
    const { outlineStyle, outlineWidth, boxShadow } = getComputedStyle(at)
    const live = at.closest(".cm-editor") !== null
    return live || (outlineStyle !== "none" && Number.parseFloat(outlineWidth) >= 1) || boxShadow !== "none"
  })

const state = async (page: Page, kind: string): Promise<string> =>
  (await page.locator(`etamu-row.kind-${kind}`).first().getAttribute("aria-label")) ?? ""
const isReady = (page: Page, kind: string) => expect.poll(() => state(page, kind), { timeout: 20_000 }).toMatch(/: ready$/)
const statement = async (page: Page, kind: string): Promise<string> =>
  (await page.locator(`etamu-row.kind-${kind}`).first().locator(".statement .line").allTextContents()).join("\n")

/** Takes what completion offers for what was typed, once the list is there and names it first. */
async function complete(page: Page, typed: string, label: string): Promise<void> {
  await page.keyboard.type(typed)
  const first = page.locator("etamu-editor .cm-tooltip-autocomplete li[aria-selected] .cm-completionLabel")
  await expect.poll(() => first.textContent({ timeout: 1000 }).catch(() => null), { timeout: 10_000 }).toBe(label)
  // For a moment after it has opened the list takes no key, so that nobody takes what they have not seen.
  await page.waitForTimeout(120)
  await page.keyboard.press("Enter")
}

/** Adds a cell of a kind by its menu. */
async function add(page: Page, kind: string): Promise<void> {
  await page.keyboard.press("Alt+n")
  await goTo(page, "ArrowDown", new RegExp(`^menuitem: ${kind}\\b`))
  await page.keyboard.press("Enter")
  await expect.poll(() => page.locator(`etamu-row.editing.kind-${kind}`).count()).toBe(1)
}

/** Puts away what completion offers by itself in a new cell. */
async function dismiss(page: Page): Promise<void> {
  const offers = page.locator("etamu-editor .cm-tooltip-autocomplete")
  await expect.poll(() => offers.count(), { timeout: 10_000 }).toBe(1)
  await page.keyboard.press("Escape")
  await expect.poll(() => offers.count()).toBe(0)
}

async function leave(page: Page): Promise<void> {
  for (let i = 0; i < 3 && (await page.locator("etamu-row.editing").count()) > 0; i++) await page.keyboard.press("Escape")
  expect(await page.locator("etamu-row.editing").count()).toBe(0)
  expect(await focused(page)).toMatch(/^textbox: Statement of/)
}

describe("by keyboard alone", () => {
  it("a file is brought in, modelled, seen on both scales, changed, undone, handed over and opened again", async () => {
    const context = await own.browser.newContext({ viewport: { width: 1440, height: 900 }, acceptDownloads: true })
    const { page, wrong } = await windowAt(context, own.server.address)
    const csv = join(own.folder, "trial.csv")
    const rows = [2, 4, 9, 16, 24, 31, 37, 39].map((killed, i) => `${i + 1},${killed},40,${i % 2 === 0 ? "007" : "008"}`)
    await writeFile(csv, `dose,killed,n,lot\n${rows.join("\n")}\n`)

    // The shelf, and a new notebook from it.
    await page.keyboard.press("Alt+s")
    await goTo(page, "Tab", /^button: Begin a new notebook/)
    expect(await ringed(page)).toBe(true)
    await page.keyboard.press("Enter")
    await expect.poll(() => page.locator("etamu-row").count()).toBe(0)

    // A file, and the types proposed for it, to be looked over: one is written otherwise.
    const choosing = page.waitForEvent("filechooser")
    await page.keyboard.press("Control+o")
    await (await choosing).setFiles(csv)
    await expect.poll(() => page.locator("etamu-row.editing.kind-data").count(), { timeout: 10_000 }).toBe(1)
    await isReady(page, "data")
    await page.keyboard.press("Escape")
    await page.keyboard.press("Escape")
    expect(await statement(page, "data")).toContain("column lot category")
    await page.keyboard.press("Enter")
    await page.keyboard.press("Control+Home")
    for (let i = 0; i < 2; i++) await page.keyboard.press("ArrowDown")
    await page.keyboard.press("End")
    expect(await statementUnderHand(page)).toContain("column dose")
    await page.keyboard.type(' unit "mg/l"')
    await isReady(page, "data")
    await leave(page)
    expect(await statement(page, "data")).toMatch(/column dose \w+ unit "mg\/l"/)

    // A model, its clauses and what they say taken from completion.
    await add(page, "model")
    expect(await page.locator("etamu-row.editing").getAttribute("aria-label")).toContain("model")
    await complete(page, "resp", "response")
    await complete(page, "kil", "killed")
    await page.keyboard.type(" out of n\n")
    await complete(page, "fam", "family")
    await complete(page, "bin", "binomial")
    await page.keyboard.press("Enter")
    await complete(page, "lin", "link")
    await complete(page, "logi", "logit")
    await page.keyboard.press("Enter")
    await complete(page, "pre", "predictor")
    await complete(page, "dos", "dose")
    await leave(page)
    await isReady(page, "model")
    const model = await statement(page, "model")
    expect(model).toMatch(/data trial\n {2}response killed out of n\n {2}family binomial\n {2}link logit\n {2}predictor dose/)

    // The two scales, with a dial that says how far they reach.
    await add(page, "dial")
    await dismiss(page)
    await page.keyboard.press("Control+a")
    await page.keyboard.type("dial farthest\nfrom 8 to 20\nstep 1\nstart 10")
    await leave(page)
    await isReady(page, "dial")
    await add(page, "scales")
    await dismiss(page)
    await page.keyboard.type("across dose\n")
    await page.keyboard.type("from 0 to farthest")
    await leave(page)
    await isReady(page, "scales")

    // Along the strip with the arrows: resting previews, Enter chooses, and the model's text says so.
    await goTo(page, "Tab", /^button: logit/)
    expect(await ringed(page)).toBe(true)
    await goTo(page, "ArrowRight", /^button: cloglog/)
    await expect.poll(() => page.locator("etamu-scales .reading").textContent()).toContain("cloglog: a preview")
    expect(await statement(page, "model")).toContain("link logit")
    await page.keyboard.press("Enter")
    await expect.poll(() => statement(page, "model")).toContain("link cloglog")
    await expect.poll(() => page.locator("etamu-scales .candidate[aria-pressed=true] b").textContent()).toBe("cloglog")
    await isReady(page, "scales")

    // The curve read off by the arrows, and told.
    await goTo(page, "Tab", /^slider: read the curve along dose/)
    expect(await ringed(page)).toBe(true)
    await page.keyboard.press("ArrowRight")
    await expect.poll(() => page.locator("[role=status]").first().textContent()).toMatch(/under cloglog, mean [\d.]+ .*linear predictor/)

    // The dial turned, and turned back by undo; the strip's choice as well.
    await goTo(page, "Shift+Tab", /^input: dial farthest/)
    expect(await ringed(page)).toBe(true)
    await page.keyboard.press("ArrowRight")
    await page.keyboard.press("ArrowRight")
    await expect.poll(() => statement(page, "dial")).toContain("start 12")
    await isReady(page, "scales")
    await page.keyboard.press("Control+z")
    await page.keyboard.press("Control+z")
    await expect.poll(() => statement(page, "dial")).toContain("start 10")
    await page.keyboard.press("Control+z")
    await expect.poll(() => statement(page, "model")).toContain("link logit")
    await page.keyboard.press("Control+Shift+z")
    await expect.poll(() => statement(page, "model")).toContain("link cloglog")
    await isReady(page, "scales")

    // Named and handed over.
    await goTo(page, "Shift+Tab", /^input: Title of the notebook/)
    await page.keyboard.press("Control+a")
    await page.keyboard.type("A trial by keyboard")
    await page.keyboard.press("Enter")
    await expect.poll(() => page.locator("span.saved").textContent()).toMatch(/^saved and read back/)
    const coming = page.waitForEvent("download")
    await page.keyboard.press("Control+s")
    const file = join(own.folder, "by-keyboard.etamu")
    await (await coming).saveAs(file)
    expect(wrong).toEqual([])
    await context.close()

    // Opened again, in a browser that knows nothing of it.
    const other = await own.browser.newContext({ viewport: { width: 1440, height: 900 } })
    const second = await windowAt(other, own.server.address)
    const again = second.page.waitForEvent("filechooser")
    await second.page.keyboard.press("Control+o")
    await (await again).setFiles(file)
    await expect.poll(() => second.page.locator("input.title").inputValue()).toBe("A trial by keyboard")
    await isReady(second.page, "scales")
    expect(await statement(second.page, "model")).toBe(model.replace("logit", "cloglog"))
    expect(second.wrong).toEqual([])
    await other.close()
  })
})

const statementUnderHand = (page: Page): Promise<string> =>
  page.evaluate(() => {
    const editor = document.querySelector("etamu-editor")
    const selection = (editor?.shadowRoot as unknown as { getSelection?(): Selection | null } | null)?.getSelection?.() ?? getSelection()
    return selection?.anchorNode?.parentElement?.closest(".cm-line")?.textContent ?? ""
  })
