// The server refuses what it should: other hosts' names, paths out of its folder, anything but reading; and sends the policy with everything.

import { request } from "node:http"
import { afterAll, beforeAll, describe, expect, it } from "vitest"
import { type Served, served } from "./served.ts"

let server: Served

beforeAll(async () => {
  server = await served()
})

afterAll(() => server.stop())

interface Answer {
  readonly status: number
  readonly headers: Record<string, unknown>
  readonly body: string
}

/** The path goes out as it stands, which `fetch` would tidy up. */
function asked(path: string, how: { method?: string; host?: string } = {}): Promise<Answer> {
  return new Promise((done, fail) => {
    const host = how.host ?? `localhost:${server.port}`
    const asking = request({ host: "127.0.0.1", port: server.port, path, method: how.method ?? "GET", headers: { host } }, (answer) => {
      let body = ""
      answer.on("data", (part: Buffer) => {
        body += part.toString()
      })
      answer.on("end", () => done({ status: answer.statusCode ?? 0, headers: answer.headers, body }))
    })
    asking.on("error", fail)
    asking.end()
  })
}

describe("the server", () => {
  it("hands out the page under the strict policy", async () => {
    const { status, headers, body } = await asked("/")
    expect(status).toBe(200)
    expect(body).toContain("<etamu-page>")
    expect(headers["content-security-policy"]).toContain("default-src 'none'")
    expect(headers["content-security-policy"]).not.toContain("unsafe")
    expect(headers["content-security-policy"]).toContain("require-trusted-types-for 'script'")
    expect(headers["cross-origin-opener-policy"]).toBe("same-origin")
    expect(headers["cross-origin-embedder-policy"]).toBe("require-corp")
    expect(headers["x-content-type-options"]).toBe("nosniff")
  })

  it.each(["/page.js", "/page.css", "/evaluator.worker.js", "/icon.svg", "/samples/index.json"])("hands out %s", async (path) => {
    const { status, headers } = await asked(path)
    expect(status).toBe(200)
    expect(headers["content-security-policy"]).toBeDefined()
  })

  it.each(["etamu.example", "etamu.example:80", "localhost.example", "127.0.0.1.example"])("refuses the name %s", async (host) => {
    expect((await asked("/", { host })).status).toBe(421)
  })

  it("refuses another port's name", async () => {
    expect((await asked("/", { host: `localhost:${server.port + 1}` })).status).toBe(421)
  })

  it.each([
    "/../node/server.js",
    "/%2e%2e/node/server.js",
    "/..%2fnode%2fserver.js",
    "/samples/../../node/server.js",
    "/..\\node\\server.js",
    "/%00",
    "/%",
  ])("never leaves its folder by %s", async (path) => {
    expect((await asked(path)).status).toBe(404)
  })

  it("only reads", async () => {
    expect((await asked("/", { method: "POST" })).status).toBe(405)
    expect((await asked("/", { method: "HEAD" })).body).toBe("")
  })
})
