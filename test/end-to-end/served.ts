// The built program as a person starts it: the server as a process of its own on a free port, and a browser window that must stay quiet: what
// the console says and what the policy blocks is gathered, and a test ends by expecting none.

import { spawn } from "node:child_process"
import { mkdtemp, rm } from "node:fs/promises"
import { tmpdir } from "node:os"
import { join } from "node:path"
import { fileURLToPath } from "node:url"
import { type Browser, type BrowserContext, chromium, type Page } from "playwright-core"
import { afterAll, beforeAll } from "vitest"
import { browserArguments, browserPath } from "../../ui/build/browser.mjs"

export interface Served {
  /** With a slash at its end. */
  readonly address: string
  readonly port: number
  stop(): Promise<void>
}

/** Starts the built server and waits until it says where it is. */
export async function served(): Promise<Served> {
  const program = fileURLToPath(new URL("../../dist/node/server.js", import.meta.url))
  const server = spawn(process.execPath, [program], { env: { ...process.env, PORT: "0" }, stdio: ["ignore", "pipe", "inherit"] })
  const address = await new Promise<string>((done, fail) => {
    let said = ""
    server.stdout.on("data", (data: Buffer) => {
      said += data.toString()
      const found = /http:\/\/localhost:\d+\//.exec(said)
      if (found !== null) done(found[0])
    })
    server.once("exit", (code) => fail(new Error(`The server ended with ${code} before it was there: ${said}`)))
  })
  return {
    address,
    port: Number(new URL(address).port),
    stop: () =>
      new Promise((done) => {
        server.once("exit", () => done())
        server.kill()
      }),
  }
}

export const launched = (): Promise<Browser> => chromium.launch({ executablePath: browserPath(), args: browserArguments })

/** The program, a browser and a folder for files, there while the tests of one file run. */
export interface Running {
  server: Served
  browser: Browser
  folder: string
}

/** Starts all three before the tests of a file and takes them away after. */
export function running(): Running {
  const own = {} as Running
  beforeAll(async () => {
    own.server = await served()
    own.browser = await launched()
    own.folder = await mkdtemp(join(tmpdir(), "etamu-"))
  })
  afterAll(async () => {
    await own.browser.close()
    await own.server.stop()
    await rm(own.folder, { recursive: true })
  })
  return own
}

export interface Window {
  readonly page: Page
  /** What went wrong so far: messages of the console, exceptions, violations of the policy. */
  readonly wrong: readonly string[]
}

/** A window at an address, once its first row is there, or whatever else is waited for. */
export async function windowAt(context: BrowserContext, address: string, there = "etamu-row"): Promise<Window> {
  const page = await context.newPage()
  const wrong: string[] = []
  // From the start, since the browser is told to hand its dialogs for files over only once somebody listens.
  page.on("filechooser", () => {})
  page.on("console", (message) => {
    if (["error", "warning"].includes(message.type())) wrong.push(`${message.type()}: ${message.text()}`)
  })
  page.on("pageerror", (error) => wrong.push(`exception: ${error.message}`))
  await page.exposeFunction("tellViolation", (what: string) => void wrong.push(`policy: ${what}`))
  await page.addInitScript(() => {
    const tell = (globalThis as unknown as { tellViolation(what: string): void }).tellViolation
    addEventListener("securitypolicyviolation", (event) => tell(`${event.violatedDirective} ${event.blockedURI} ${event.sourceFile}`))
  })
  await page.goto(address)
  await page.waitForSelector(there)
  return { page, wrong }
}
