// Every block in a real browser: drawn, read by pointer and by key, previewed without an evaluation, and quick enough for a drag.

import { html, render } from "lit"
import { afterEach, describe, expect, it } from "vitest"
import { userEvent } from "vitest/browser"
import type { Block, ScalesBlock } from "../../cells/block.ts"
import { scalesLayout, scalesScene } from "../../ui/drawing/scales/index.ts"
import { textBox, textsOf } from "../../ui/drawing/scene.ts"
import type { IntentDetail } from "../../ui/page/intent.ts"
import "../../ui/page/blocks/block.ts"
import { dialText } from "../../ui/page/blocks/dial.ts"
import { linkColours } from "../../ui/page/blocks/look.ts"
import { safeAddress } from "../../ui/page/blocks/prose.ts"
import { tableText } from "../../ui/page/blocks/table.ts"
import {
  beetleScales,
  choiceSample,
  clottingScales,
  dialSample,
  formulaSample,
  gallery,
  levelScales,
  manyScales,
  proseSample,
  tableSample,
} from "./gallery/samples.ts"

const TOKENS = `:root { color-scheme: light; --paper: #fbfaf7; --sheet: #fff; --tint: #f3f0e8; --ink: #1e2328; --soft: #625e56; --line: #dbd7cd;
  --accent: #1f5fa8; --text-face: system-ui, sans-serif; --title-face: Georgia, serif; --mono-face: monospace; }`

let host: HTMLElement | null = null

afterEach(() => {
  host?.remove()
  host = null
})

/** Puts a block on the page at a width; gives the element that draws it and the intents it sends. */
async function shown(block: Block, width = 860) {
  host?.remove()
  host = document.createElement("div")
  const sheet = new CSSStyleSheet()
  sheet.replaceSync(TOKENS)
  document.adoptedStyleSheets = [sheet]
  host.style.width = `${width}px`
  document.body.append(host)
  const intents: IntentDetail[] = []
  const spoken: string[] = []
  host.addEventListener("etamu-intent", (event) => intents.push(event.detail))
  host.addEventListener("etamu-say", (event) => spoken.push(event.detail))
  const root = host
  const put = async (next: Block): Promise<void> => {
    render(html`<etamu-block .block=${next}></etamu-block>`, root)
    await root.querySelector("etamu-block")?.updateComplete
    await inner().updateComplete
  }
  const inner = (): HTMLElementTagNameMap["etamu-scales"] =>
    (root.querySelector("etamu-block")?.shadowRoot?.firstElementChild ??
      document.createElement("etamu-scales")) as HTMLElementTagNameMap["etamu-scales"]
  await put(block)
  await new Promise((resolve) => requestAnimationFrame(resolve))
  await inner().updateComplete
  const view = inner().shadowRoot as ShadowRoot
  return { view, element: inner(), intents, spoken, put }
}

const one = <E extends Element>(view: ParentNode, selector: string): E => {
  const found = view.querySelector<E>(selector)
  if (found === null) throw new Error(`There is no ${selector}.`)
  return found
}
const all = (view: ParentNode, selector: string): readonly HTMLElement[] => [...view.querySelectorAll<HTMLElement>(selector)]

describe("every block", () => {
  it.each(gallery)("is drawn: %s", async (_, block) => {
    const { view, element } = await shown(block)
    const drawn = block.type === "sentence" ? element.textContent : view.textContent
    expect(drawn?.trim().length).toBeGreaterThan(3)
    expect(element.getBoundingClientRect().height).toBeGreaterThan(10)
  })
})

describe("the two scales on the page", () => {
  it.each([
    [340, beetleScales()],
    [390, clottingScales()],
    [600, levelScales()],
    [860, clottingScales()],
    [990, beetleScales()],
  ] as const)("have texts no wider than was reckoned, none on another, at a width of %i", async (width, block) => {
    const { view } = await shown(block, width)
    const layout = scalesLayout(block, width)
    const reckoned = layout === null ? [] : textsOf(scalesScene(block, layout, null).marks)
    const texts = [...view.querySelectorAll<SVGTextElement>("svg.scene text")]
    expect(texts).toHaveLength(reckoned.length)
    const tooWide = texts.filter((text, i) => {
      const mark = reckoned[i]
      return mark === undefined || text.textContent !== mark.text || text.getBBox().width > textBox(mark).right - textBox(mark).left + 1
    })
    expect(tooWide.map((text) => text.textContent)).toEqual([])
    const boxes = texts.map((text) => text.getBBox())
    const meeting = boxes.flatMap((a, i) =>
      boxes.flatMap((b, j) =>
        j > i && a.x < b.x + b.width && b.x < a.x + a.width && a.y + 3 < b.y + b.height - 3 && b.y + 3 < a.y + a.height - 3
          ? [`${texts[i]?.textContent} on ${texts[j]?.textContent}`]
          : [],
      ),
    )
    expect(meeting).toEqual([])
  })

  it("shows a ghost while a candidate is rested on, and sends nothing", async () => {
    const { view, element, intents } = await shown(beetleScales())
    expect(all(view, ".ghost")).toHaveLength(0)
    await userEvent.hover(one(view, "[data-link=logit]"))
    await element.updateComplete
    expect(all(view, ".curve.ghost.link-1").length).toBeGreaterThan(0)
    expect(one(view, ".reading").textContent).toContain("nothing is changed yet")
    await userEvent.hover(one(view, "figcaption"))
    await element.updateComplete
    expect(all(view, ".ghost")).toHaveLength(0)
    expect(intents).toEqual([])
  })

  it("sends the candidate's own intent when it is chosen by hand, and none for the chosen one", async () => {
    const block = beetleScales()
    const { view, intents } = await shown(block)
    await userEvent.click(one(view, "[data-link=cloglog]"))
    expect(intents).toEqual([])
    await userEvent.click(one(view, "[data-link=probit]"))
    expect(intents).toEqual([{ intent: block.candidates[1]?.choose }])
  })

  it("lets arrow keys walk along the strip as previews, and the enter key choose", async () => {
    const block = beetleScales()
    const { view, element, intents } = await shown(block)
    expect(all(view, ".candidate[tabindex='0']").map((button) => button.dataset["link"])).toEqual(["cloglog"])
    await userEvent.tab()
    expect(view.activeElement).toBe(one(view, "[data-link=cloglog]"))
    await userEvent.keyboard("{ArrowRight}{ArrowRight}")
    await element.updateComplete
    expect(view.activeElement).toBe(one(view, "[data-link=cauchit]"))
    expect(all(view, ".curve.ghost.link-5").length).toBeGreaterThan(0)
    expect(all(view, ".candidate[tabindex='0']").map((button) => button.dataset["link"])).toEqual(["cauchit"])
    expect(intents).toEqual([])
    await userEvent.keyboard("{Enter}")
    expect(intents.map((detail) => detail.intent.edits[0]?.says)).toEqual(["cauchit"])
  })

  it("reads along the curve by arrow keys, aloud too", async () => {
    const { view, element, spoken } = await shown(beetleScales())
    const plot = one<HTMLElement>(view, ".plot")
    plot.focus()
    await userEvent.keyboard("{ArrowRight}{ArrowRight}")
    await element.updateComplete
    expect(plot.getAttribute("aria-valuenow")).toBe("101")
    expect(plot.getAttribute("aria-valuetext")).toMatch(/^dose 1\.796 log10 mg\/l: under cloglog, mean 0\.6/)
    expect(spoken.at(-1)).toBe(plot.getAttribute("aria-valuetext"))
    expect(all(view, ".lit-point")).toHaveLength(2)
    await userEvent.keyboard("{Escape}")
    await element.updateComplete
    expect(all(view, ".lit-point")).toHaveLength(0)
  })

  it("reads where it is pointed at, in a line that covers nothing", async () => {
    const { view, element } = await shown(beetleScales())
    const plot = one<HTMLElement>(view, ".plot")
    const box = plot.getBoundingClientRect()
    plot.dispatchEvent(new PointerEvent("pointermove", { clientX: box.left + 200, clientY: box.top + 160, bubbles: true }))
    await element.updateComplete
    const reading = one<HTMLElement>(view, ".reading")
    expect(reading.textContent?.replaceAll(/\s+/g, " ")).toMatch(/dose 1\.\d+ log10 mg\/l μ ?0\.\d+/)
    expect(reading.getBoundingClientRect().bottom).toBeLessThanOrEqual(box.top + 0.5)
    const before = plot.getBoundingClientRect().top
    plot.dispatchEvent(new PointerEvent("pointerleave", { bubbles: true }))
    await element.updateComplete
    expect(plot.getBoundingClientRect().top).toBe(before)
  })

  it("says beside the strip why a candidate has no fit", async () => {
    const { view } = await shown(levelScales())
    const button = one<HTMLElement>(view, "[data-link=reciprocal]")
    const id = button.getAttribute("aria-describedby")
    expect(view.getElementById(id ?? "")?.textContent).toContain("means below 0 at site mill")
    expect(button.textContent).toContain("no fit")
  })

  it("has its points in numbers, made when they are asked for", async () => {
    const { view, element } = await shown(beetleScales())
    const details = one<HTMLDetailsElement>(view, ".points")
    expect(details.querySelector("etamu-table")).toBeNull()
    await userEvent.click(one(details, "summary"))
    await expect.poll(() => details.querySelector("etamu-table")?.shadowRoot?.querySelectorAll("tbody tr").length).toBe(8)
    await element.updateComplete
    expect(details.querySelector("etamu-table")?.shadowRoot?.textContent).toContain("1.6907")
  })

  it("says plainly when there is nothing to draw", async () => {
    const block = beetleScales()
    const empty: ScalesBlock = {
      ...block,
      candidates: block.candidates.map((c) => ({ ...c, curves: [], trouble: "No fit." })),
      summary: "No candidate has a fit.",
    }
    const { view } = await shown(empty)
    expect(view.textContent).toContain("No candidate has a fit.")
    expect(view.querySelector(".plot")).toBeNull()
  })

  it("is redrawn for a new block with a thousand points in under 8 ms, and a reading in under 2", async () => {
    const blocks = [manyScales(1000), { ...manyScales(1000), range: [1.66, 1.94] as const }]
    const { view, element, put } = await shown(blocks[0] as Block)
    const times: number[] = []
    for (let i = 0; i < 40; i += 1) {
      const start = performance.now()
      await put({ ...(blocks[i % 2] as ScalesBlock) })
      times.push(performance.now() - start)
    }
    const plot = one<HTMLElement>(view, ".plot")
    const box = plot.getBoundingClientRect()
    const moves: number[] = []
    for (let i = 0; i < 60; i += 1) {
      const start = performance.now()
      plot.dispatchEvent(new PointerEvent("pointermove", { clientX: box.left + 60 + i * 4, clientY: box.top + 160 }))
      await element.updateComplete
      moves.push(performance.now() - start)
    }
    // The fastest run is the one that nothing else on the machine disturbed.
    expect(Math.min(...times)).toBeLessThan(8)
    expect(Math.min(...moves)).toBeLessThan(2)
  })
})

describe("a dial", () => {
  it("sends every step of a drag as one gesture, and ends it when the hand lets go", async () => {
    const { view, intents } = await shown(dialSample)
    const slider = one<HTMLInputElement>(view, "input")
    for (const step of ["13", "14", "15"]) {
      slider.value = step
      slider.dispatchEvent(new Event("input"))
    }
    slider.dispatchEvent(new Event("change"))
    expect(intents.map((detail) => [detail.intent.edits[0]?.says, detail.ended ?? false])).toEqual([
      ["0.13", false],
      ["0.14", false],
      ["0.15", false],
      ["0.15", true],
    ])
    expect(new Set(intents.map((detail) => detail.gesture)).size).toBe(1)
    expect(intents[0]?.gesture).toBeTruthy()
  })

  it("keeps the value in the hand while findings lag behind", async () => {
    const { view, element, put } = await shown(dialSample)
    const slider = one<HTMLInputElement>(view, "input")
    slider.value = "20"
    slider.dispatchEvent(new Event("input"))
    await put({ ...dialSample, value: 0.13 })
    await element.updateComplete
    expect(slider.value).toBe("20")
    expect(one(view, "output").textContent).toBe("0.20")
  })

  it("shows the hand's value after the hand let go until a finding agrees with it", async () => {
    const { view, element, put } = await shown(dialSample)
    const slider = one<HTMLInputElement>(view, "input")
    slider.value = "20"
    slider.dispatchEvent(new Event("input"))
    slider.dispatchEvent(new Event("change"))
    await put({ ...dialSample, value: 0.15 })
    await element.updateComplete
    expect(one(view, "output").textContent).toBe("0.20")
    await put({ ...dialSample, value: 0.2 })
    await put({ ...dialSample, value: 0.07 })
    expect(one(view, "output").textContent).toBe("0.07")
  })

  it("goes by arrow keys, a gesture a key", async () => {
    const { view, intents } = await shown(dialSample)
    one<HTMLInputElement>(view, "input").focus()
    await userEvent.keyboard("{ArrowRight}")
    expect(intents.at(-1)).toMatchObject({ ended: true, intent: { edits: [{ cell: null, clause: "start", nth: 0, says: "0.13" }] } })
  })

  it("writes exact decimals: from + k · step with the digits of the step", () => {
    const range = { from: -0.3, to: 0.3, step: 0.1, steps: 6, digits: 1 }
    expect([0, 1, 2, 3, 4, 5, 6].map((step) => dialText(range, step))).toEqual(["-0.3", "-0.2", "-0.1", "0.0", "0.1", "0.2", "0.3"])
  })

  it("with choices is a list, and a choice is quoted", async () => {
    const { view, intents } = await shown(choiceSample)
    await userEvent.click(all(view, "input")[2] as HTMLElement)
    expect(intents.map((detail) => detail.intent.edits[0]?.says)).toEqual(['"both"'])
  })
})

describe("a table", () => {
  it("stands on its decimal points", async () => {
    const { view } = await shown(tableSample)
    const points = [...view.querySelectorAll("tbody tr")]
      .slice(0, 2)
      .map((row) => (row.querySelector(".after") as HTMLElement).getBoundingClientRect().left)
    expect(points[0]).toBeCloseTo(points[1] as number, 0)
  })

  it("shows every digit on request", async () => {
    const { view, element } = await shown(tableSample)
    await userEvent.click(all(view, ".small-button")[1] as HTMLElement)
    await element.updateComplete
    expect(view.textContent).toContain("22.04116982075754")
  })

  it("is copied with every digit, an interval in two columns", () => {
    const [head, first, , third] = tableText(tableSample).split("\n")
    expect(head).toBe("for\tβ\tstandard error\t95 % Wald from\t95 % Wald to\tp")
    expect(first).toBe("intercept\t-39.57231060613717\t3.240279\t-45.923\t-33.2215\t2.7e-34")
    expect(third).toBe("dose : lot two\t\t0.0123\t\t\t0.731")
  })

  it("is folded until asked for where it says so", async () => {
    const { view } = await shown({ ...tableSample, caption: "The curve in numbers", folded: true })
    expect(one<HTMLDetailsElement>(view, "details").open).toBe(false)
    expect(one(view, "summary").textContent?.trim()).toBe("The curve in numbers")
  })
})

describe("a note", () => {
  it("never becomes markup, and leads out only where it may", async () => {
    const { view } = await shown(proseSample)
    expect(view.querySelector("b")).toBeNull()
    expect(view.textContent).toContain("<b>markup stays text</b>")
    expect(all(view, "a").map((link) => link.getAttribute("href"))).toEqual(["https://example.org/a"])
    expect(one(view, "a").getAttribute("rel")).toContain("noreferrer")
    expect(view.textContent).toContain("not this (javascript:alert(1))")
  })

  it.each([
    ["https://example.org", true],
    ["mailto:a@example.org", true],
    ["javascript:alert(1)", false],
    ["data:text/html,x", false],
    ["//example.org", false],
    ["file:///etc", false],
  ])("follows %s: %s", (address, safe) => {
    expect(safeAddress(address)).toBe(safe)
  })
})

it("a formula is MathML", async () => {
  const { view } = await shown(formulaSample)
  const math = one(view, "math")
  expect(math.namespaceURI).toBe("http://www.w3.org/1998/Math/MathML")
  expect(math.querySelector("msub")?.namespaceURI).toBe(math.namespaceURI)
  expect(math.querySelectorAll("mi[mathvariant=normal]")).toHaveLength(3)
})

describe("colours of links", () => {
  const luminance = (hex: string): number => {
    const [r = 0, g = 0, b = 0] = [1, 3, 5].map((i) => {
      const share = Number.parseInt(hex.slice(i, i + 2), 16) / 255
      return share <= 0.04045 ? share / 12.92 : ((share + 0.055) / 1.055) ** 2.4
    })
    return 0.2126 * r + 0.7152 * g + 0.0722 * b
  }
  const contrast = (a: string, b: string): number => {
    const [low, high] = [luminance(a), luminance(b)].toSorted((x, y) => x - y) as [number, number]
    return (high + 0.05) / (low + 0.05)
  }

  it.each(linkColours)("%s and %s are seen on their paper at 3 : 1", (light, dark) => {
    expect(contrast(light, "#fbfaf7")).toBeGreaterThanOrEqual(3)
    expect(contrast(dark, "#17181a")).toBeGreaterThanOrEqual(3)
  })
})
