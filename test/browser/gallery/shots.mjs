// Builds the gallery and takes pictures of it: `node test/browser/gallery/shots.mjs FOLDER`, three widths in light and dark.

import { mkdirSync, readFileSync } from "node:fs"
import { createServer } from "node:http"
import { fileURLToPath } from "node:url"
import { build } from "esbuild"
import { chromium } from "playwright-core"
import { browserArguments, browserPath } from "../../../ui/build/browser.mjs"

const folder = process.argv[2] ?? "gallery"
const widths = (process.argv[3] ?? "1440,1024,390").split(",").map(Number)
const looks = (process.argv[4] ?? "light,dark").split(",")
const root = fileURLToPath(new URL("../../..", import.meta.url))

const built = await build({
  absWorkingDir: root,
  entryPoints: ["test/browser/gallery/gallery.ts", "test/browser/gallery/gallery.css"],
  outdir: "out",
  bundle: true,
  write: false,
  format: "esm",
  target: "es2022",
})
const files = new Map(built.outputFiles.map((file) => [file.path.endsWith(".css") ? "/gallery.css" : "/gallery.js", file.contents]))
const index = readFileSync(new URL("gallery.html", import.meta.url))
const policy =
  "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self' data:; require-trusted-types-for 'script'; trusted-types lit-html"
const server = createServer((request, response) => {
  const body = files.get(request.url ?? "")
  const type = request.url?.endsWith(".css") ? "text/css" : request.url?.endsWith(".js") ? "text/javascript" : "text/html"
  response.writeHead(200, { "Content-Type": `${type}; charset=utf-8`, "Content-Security-Policy": policy })
  response.end(body ?? index)
}).listen(0, "127.0.0.1")
await new Promise((resolve) => server.once("listening", resolve))

mkdirSync(folder, { recursive: true })
const browser = await chromium.launch({ executablePath: browserPath(), args: browserArguments })
for (const look of looks) {
  for (const width of widths) {
    const page = await browser.newPage({ viewport: { width, height: 900 }, colorScheme: look })
    page.on("console", (message) => console.log(`${message.type()}: ${message.text()}`))
    page.on("pageerror", (error) => console.log(`error: ${error.message}`))
    await page.goto(`http://127.0.0.1:${server.address().port}/`)
    await page.waitForTimeout(400)
    await page.screenshot({ path: `${folder}/gallery-${width}-${look}.png`, fullPage: true })
    for (const [i, section] of (await page.locator("section").all()).entries()) {
      const shot = (state) => section.screenshot({ path: `${folder}/${width}-${look}-${String(i).padStart(2, "0")}${state}.png` })
      await shot("")
      if ((await section.locator("etamu-scales").count()) === 0) continue
      await section.locator(".candidate").nth(0).hover()
      await shot("-preview")
      const plot = await section.locator(".plot").boundingBox()
      await page.mouse.move(plot.x + plot.width * 0.24, plot.y + 150)
      await shot("-pointing")
    }
    await page.close()
  }
}
await browser.close()
server.close()
