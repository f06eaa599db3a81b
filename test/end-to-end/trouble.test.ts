// What may go wrong around a notebook is said plainly, and nothing is lost: a browser that keeps nothing, a file that was altered, a file that
// is none, a data file that is missing.

import { readFile, writeFile } from "node:fs/promises"
import { join } from "node:path"
import type { Page } from "playwright-core"
import { describe, expect, it } from "vitest"
import { running, windowAt } from "./served.ts"

const own = running()

const bands = (page: Page) => page.locator("div.band").allTextContents()
const saysBand = (page: Page, words: RegExp, timeout = 5000) =>
  expect.poll(async () => (await bands(page)).join(" | "), { timeout }).toMatch(words)

async function handedOver(page: Page): Promise<string> {
  const coming = page.waitForEvent("download")
  await page.keyboard.press("Control+s")
  const path = join(own.folder, `${crypto.randomUUID()}.etamu`)
  await (await coming).saveAs(path)
  return path
}

async function opened(page: Page, path: string): Promise<void> {
  const choosing = page.waitForEvent("filechooser")
  await page.getByRole("button", { name: "Open" }).click()
  await (await choosing).setFiles(path)
}

describe("trouble", () => {
  it("of a browser that keeps nothing is said at once, and the notebook works and can be handed over", async () => {
    const context = await own.browser.newContext()
    await context.addInitScript(() => Object.defineProperty(globalThis, "indexedDB", { value: undefined }))
    const { page, wrong } = await windowAt(context, own.server.address)
    await saysBand(page, /Not saved\. .*private window/)
    expect(await page.locator("span.saved").textContent()).toBe("not saved")
    await page.locator("etamu-row.kind-dial .statement").first().focus()
    await page.keyboard.press("Alt+o")
    await expect.poll(() => page.locator("etamu-row.kind-dial").first().getAttribute("aria-label")).toContain("off")
    expect(await readFile(await handedOver(page), "utf8")).toContain("off dial")
    expect(wrong).toEqual([])
    await context.close()
  })

  it("with a file that was altered opens it read only, names the break, and lets the person decide", async () => {
    const context = await own.browser.newContext()
    const { page, wrong } = await windowAt(context, own.server.address)
    await expect.poll(() => page.locator("etamu-row.form-ready").count(), { timeout: 20_000 }).toBe(await page.locator("etamu-row").count())
    const path = await handedOver(page)
    const text = await readFile(path, "utf8")
    const id = /"id":"([0-9a-f-]{36})"/.exec(text)?.[1] ?? ""
    await writeFile(path, text.replace("link cloglog", "link probit").replaceAll(id, "00000000-0000-4000-8000-000000000000"))
    await opened(page, path)
    await saysBand(page, /not as it was sealed|changed after it was written/)
    await expect.poll(() => page.locator("etamu-menu.tools").count()).toBe(0)

    // Nothing is decided by loading the page again, nor can the break be sealed over.
    await page.reload()
    await page.waitForSelector("etamu-row")
    await saysBand(page, /not as it was sealed|changed after it was written/)
    expect(await page.locator("span.saved").textContent()).toBe("read only until you decide")
    expect(await page.locator("etamu-menu.tools").count()).toBe(0)
    await page.getByRole("button", { name: "Hand over" }).click()
    await saysBand(page, /Not handed over/)

    await page.getByRole("button", { name: "Write in it all the same" }).click()
    await expect.poll(() => page.locator("etamu-menu.tools").count()).toBeGreaterThan(0)
    await expect.poll(() => page.locator("span.saved").textContent()).toMatch(/^saved and read back/)
    await page.reload()
    await expect.poll(() => page.locator("etamu-menu.tools").count()).toBeGreaterThan(0)
    expect(await bands(page)).toEqual([])
    // From then on the trail says that it was written in although it was not whole.
    expect(await readFile(await handedOver(page), "utf8")).toMatch(
      /"@record":"trail","body":\{"first":"[^"]+","intact":false.*"kind":"opened"/,
    )
    expect(wrong).toEqual([])
    await context.close()
  })

  it("with an enclosure whose bytes are missing takes the file that was meant, and says so of another", async () => {
    const first = await own.browser.newContext()
    const whole = await handedOver((await windowAt(first, own.server.address)).page)
    await first.close()
    const records = (await readFile(whole, "utf8")).split("\n")
    const csv = (JSON.parse(records.find((line) => line.startsWith('{"@record":"bytes"')) ?? "{}") as { data: string }).data
    const id = "00000000-0000-4000-8000-000000000001"
    const withoutBytes = join(own.folder, "without-bytes.etamu")
    const left = records.filter((line) => !/^{"@record":"(bytes|seal)"/.test(line)).join("\n")
    await writeFile(withoutBytes, left.replaceAll(/"id":"[0-9a-f-]{36}"/g, `"id":"${id}"`).replaceAll(/^{"@record":"trail".*\n/gm, ""))
    // A browser that has never held these bytes, so that it cannot know them.
    const context = await own.browser.newContext()
    await context.route("**/samples/index.json", (route) => route.fulfill({ json: [] }))
    const { page, wrong } = await windowAt(context, own.server.address, ".adder.end")
    await opened(page, withoutBytes)
    const asks = page.locator("etamu-row.kind-data .missing")
    await expect.poll(() => asks.textContent()).toMatch(/was written with\s+bottles\.csv/)

    // Another file of that name is not taken in silence.
    const other = join(own.folder, "bottles.csv")
    await writeFile(other, `${csv + csv.split("\n").at(-2)}\n`)
    const choosing = page.waitForEvent("filechooser")
    await asks.getByRole("button", { name: "choose it" }).click()
    await (await choosing).setFiles(other)
    await saysBand(page, /This is not the bottles\.csv that the notebook was written with.*SHA-256/)
    expect(await asks.count()).toBe(1)

    // What the notebook states outlives the page, bytes or no bytes.
    await page.reload()
    await expect.poll(() => asks.textContent()).toMatch(/was written with/)

    // The file that was meant is known by its bytes, whatever it is called by now.
    await page.evaluate((text) => {
      const transfer = new DataTransfer()
      transfer.items.add(new File([text], "copy of bottles (1).csv", { type: "text/csv" }))
      dispatchEvent(new DragEvent("drop", { dataTransfer: transfer, bubbles: true, cancelable: true }))
    }, csv)
    await expect.poll(() => asks.count()).toBe(0)
    await expect.poll(() => page.locator("etamu-row.kind-data").getAttribute("aria-label"), { timeout: 10_000 }).toMatch(/: ready/)
    expect(await page.locator("etamu-row.kind-data").count()).toBe(1)

    // It is an edit like others: undone, the cell asks again, and another file can be used all the same.
    await page.getByRole("button", { name: "Undo" }).click()
    await expect.poll(() => asks.count()).toBe(1)
    const again = page.waitForEvent("filechooser")
    await asks.getByRole("button", { name: "choose it" }).click()
    await (await again).setFiles(other)
    await page.getByRole("button", { name: "Use it all the same" }).click()
    await expect.poll(() => asks.count()).toBe(0)
    await expect.poll(() => page.locator("etamu-row.kind-data").getAttribute("aria-label"), { timeout: 10_000 }).toMatch(/: ready/)
    expect(wrong).toEqual([])
    await context.close()
  })

  it("with a file that is no notebook says what it is not, and leaves the page as it was", async () => {
    const context = await own.browser.newContext()
    const { page, wrong } = await windowAt(context, own.server.address)
    const title = await page.locator("input.title").inputValue()
    const path = join(own.folder, "letter.etamu")
    await writeFile(path, "Dear reader,\n")
    await opened(page, path)
    await saysBand(page, /letter\.etamu was not opened/)
    expect(await page.locator("input.title").inputValue()).toBe(title)
    expect(wrong).toEqual([])
    await context.close()
  })

  it("with a file on the shelf already offers both, and opens the copy beside it", async () => {
    const context = await own.browser.newContext()
    const { page, wrong } = await windowAt(context, own.server.address)
    const title = await page.locator("input.title").inputValue()
    await opened(page, await handedOver(page))
    await saysBand(page, /on the shelf already/)
    await page.getByRole("button", { name: "Open the file beside it, as a copy" }).click()
    await expect.poll(() => page.locator("input.title").inputValue()).toBe(`${title} (from a file)`)
    await page.getByRole("button", { name: "Shelf" }).click()
    await expect.poll(() => page.locator("dialog .books").first().locator("li").count()).toBe(2)
    expect(wrong).toEqual([])
    await context.close()
  })

  it("with data that a plain file names and does not hold asks for them by name", async () => {
    const context = await own.browser.newContext()
    const { page, wrong } = await windowAt(context, own.server.address)
    const path = join(own.folder, "plain.cells")
    await writeFile(path, 'note\n# Two columns\n---\ndata d\n  from "two.csv"\n  column x number\n  column y count\n')
    await opened(page, path)
    await expect.poll(() => page.locator("input.title").inputValue()).toBe("Two columns")
    await expect.poll(() => page.locator("etamu-row.kind-data .missing").textContent()).toContain("two.csv")
    const csv = join(own.folder, "other-name.csv")
    await writeFile(csv, "x,y\n1.5,2\n2.5,3\n")
    const choosing = page.waitForEvent("filechooser")
    await page.locator("etamu-row.kind-data .missing button").click()
    await (await choosing).setFiles(csv)
    await expect.poll(() => page.locator("etamu-row.kind-data").getAttribute("aria-label"), { timeout: 10_000 }).toMatch(/: ready/)
    expect(await page.locator("etamu-row").count()).toBe(2)
    expect(wrong).toEqual([])
    await context.close()
  })

  it("of work that never ends stays with its cell: the worker is started anew, and the rest goes on", async () => {
    const context = await own.browser.newContext()
    // A worker that falls into an endless loop on one value.
    await context.route("**/evaluator.worker.js", async (route) => {
      const answer = await route.fetch()
      const trap = 'addEventListener("message", ({ data }) => { while (data.task?.text.startsWith("value stuck")) {} });'
      await route.fulfill({ response: answer, body: trap + (await answer.text()) })
    })
    const { page, wrong } = await windowAt(context, own.server.address)
    const ready = () => page.locator("etamu-row.form-ready").count()
    const all = await page.locator("etamu-row").count()
    await expect.poll(ready, { timeout: 20_000 }).toBe(all)
    await page.keyboard.press("Alt+n")
    await page.getByRole("menuitem", { name: /^value/ }).press("Enter")
    await expect.poll(() => page.locator("etamu-row.editing").count()).toBe(1)
    await page.keyboard.press("Control+a")
    await page.keyboard.type("value stuck = 1")
    await expect.poll(() => page.locator("etamu-row.form-working").count()).toBe(1)

    // Written otherwise, it is not waited for: what is wanted now comes as soon as the silence is sure, and that is said.
    await page.keyboard.press("Control+a")
    await page.keyboard.type("value free = 1")
    await expect.poll(ready, { timeout: 10_000 }).toBe(all + 1)
    await saysBand(page, /did not answer for \d seconds and was started anew/)

    // Written again and left so, it is tried twice, given up as ours, and everything else stands.
    await page.keyboard.press("Control+a")
    await page.keyboard.type("value stuck = 2")
    await expect.poll(() => page.locator("etamu-row.form-crash").count(), { timeout: 40_000 }).toBe(1)
    expect(await page.locator("etamu-row.form-crash .crash").textContent()).toContain("did not answer")
    expect(await ready()).toBe(all)
    expect(wrong).toEqual([])
    await context.close()
  })
})
