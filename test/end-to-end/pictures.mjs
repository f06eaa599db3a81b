// Takes the picture that README shows, from the built program with its first sample: `node test/end-to-end/pictures.mjs`. Only on request, so
// that no test run changes a file; the clock, the look and the size are fixed, so that the picture changes only when the page does.

import { spawn } from "node:child_process"
import { mkdirSync } from "node:fs"
import { fileURLToPath } from "node:url"
import { chromium } from "playwright-core"
import { browserArguments, browserPath } from "../../ui/build/browser.mjs"
import { buildAll } from "../../ui/build/build.mjs"

const root = new URL("../../", import.meta.url)
const folder = new URL("pictures/", import.meta.url)

await buildAll()
const server = spawn(process.execPath, [fileURLToPath(new URL("dist/node/server.js", root))], {
  env: { ...process.env, PORT: "0" },
  stdio: ["ignore", "pipe", "inherit"],
})
const address = await new Promise((done) => {
  let said = ""
  server.stdout.on("data", (data) => {
    said += data
    const found = /http:\/\/localhost:\d+\//.exec(said)
    if (found !== null) done(found[0])
  })
})
const browser = await chromium.launch({ executablePath: browserPath(), args: browserArguments })
try {
  const context = await browser.newContext({ viewport: { width: 1240, height: 700 }, colorScheme: "light", reducedMotion: "reduce" })
  const page = await context.newPage()
  await page.clock.setFixedTime(new Date("2024-05-14T14:02:00"))
  await page.goto(address)
  await page.waitForSelector("etamu-row")
  await page.waitForFunction(() => [...document.querySelectorAll("etamu-row")].every((row) => row.classList.contains("form-ready")))
  // The pointer reads the curve just inside the data, so that the bridge is lit and what it is for is seen.
  const plot = await page.locator("etamu-scales .plot").first().boundingBox()
  await page.mouse.move(plot.x + plot.width * 0.24, plot.y + plot.height * 0.55)
  await page.waitForFunction(() => {
    const block = document.querySelector("etamu-row.kind-scales etamu-block")
    return /η/.test(
      block?.shadowRoot?.querySelector("etamu-scales")?.shadowRoot?.querySelector(".reading b")?.parentElement?.parentElement
        ?.textContent ?? "",
    )
  })
  // What fades in under the pointer has done so.
  await page.waitForTimeout(500)
  mkdirSync(folder, { recursive: true })
  await page.screenshot({ path: fileURLToPath(new URL("two-scales.png", folder)), animations: "disabled", caret: "hide" })
} finally {
  await browser.close()
  server.kill()
}
