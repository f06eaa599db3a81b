// The server: hands out the files of the built page to this machine's browser, and nothing else. It listens on the loopback address only,
// answers only requests that name it (so that no other site can reach it by a name of its own), never leaves its folder, and sends
// the policy under which nothing but our own files can run.

import { readFile, realpath } from "node:fs/promises"
import { createServer, type IncomingMessage, type Server, type ServerResponse } from "node:http"
import type { AddressInfo } from "node:net"
import { dirname, extname, join, sep } from "node:path"
import { fileURLToPath } from "node:url"

/** Where the page is served unless PORT says otherwise. */
const usualPort = 4173

/** Nothing inline, nothing from elsewhere, no markup from strings: see the policy's names for the two that may make script addresses. */
const policy = [
  "default-src 'none'",
  "script-src 'self'",
  "style-src 'self'",
  "img-src 'self' data:",
  "connect-src 'self'",
  "worker-src 'self'",
  "manifest-src 'self'",
  "base-uri 'none'",
  "form-action 'none'",
  "frame-ancestors 'none'",
  "require-trusted-types-for 'script'",
  "trusted-types lit-html etamu",
].join("; ")

const headers: Readonly<Record<string, string>> = {
  "Content-Security-Policy": policy,
  "Cross-Origin-Opener-Policy": "same-origin",
  "Cross-Origin-Embedder-Policy": "require-corp",
  "Cross-Origin-Resource-Policy": "same-origin",
  "X-Content-Type-Options": "nosniff",
  "Referrer-Policy": "no-referrer",
  "Cache-Control": "no-cache",
}

const media: Readonly<Record<string, string>> = {
  ".html": "text/html; charset=utf-8",
  ".css": "text/css; charset=utf-8",
  ".js": "text/javascript; charset=utf-8",
  ".map": "application/json",
  ".json": "application/json",
  ".svg": "image/svg+xml",
  ".csv": "text/csv; charset=utf-8",
  ".tsv": "text/tab-separated-values; charset=utf-8",
  ".cells": "text/plain; charset=utf-8",
  ".etamu": "application/vnd.etamu+jsonl",
}

/** Starts the server and says where it is. Falls back to a free port when the usual one is taken; a port asked for by PORT is kept to. */
export async function serve(): Promise<Server> {
  const root = await realpath(join(dirname(fileURLToPath(import.meta.url)), "..", "page"))
  const server = createServer((request, response) => {
    answer(root, request, response).catch(() => refuse(response, 500, "The server could not read its own file."))
  })
  const said = process.env["PORT"]
  const asked = said === undefined || said === "" ? null : Number(said)
  if (asked !== null && !(Number.isInteger(asked) && asked >= 0 && asked < 65536)) {
    throw new Error(`PORT has to be a whole number from 0 to 65535, and it is ${said}.`)
  }
  try {
    await listening(server, asked ?? usualPort)
  } catch (wrong) {
    if (asked !== null || (wrong as NodeJS.ErrnoException).code !== "EADDRINUSE") throw wrong
    await listening(server, 0)
  }
  const { port } = server.address() as AddressInfo
  if (asked === null && port !== usualPort) {
    console.log(
      `Port ${usualPort} is taken. A browser keeps one shelf for each address, so the shelf here is not the one kept under ${usualPort}.`,
    )
  }
  console.log(`Etamu is at http://localhost:${port}/ (Ctrl+C ends it)`)
  return server
}

function listening(server: Server, port: number): Promise<void> {
  return new Promise((done, fail) => {
    server.once("error", fail)
    server.listen(port, "127.0.0.1", () => {
      server.off("error", fail)
      done()
    })
  })
}

async function answer(root: string, request: IncomingMessage, response: ServerResponse): Promise<void> {
  if (!isOurs(request)) return refuse(response, 421, "This server answers only to localhost.")
  if (request.method !== "GET" && request.method !== "HEAD") return refuse(response, 405, "Only reading is possible here.")
  const file = await within(root, request.url ?? "/")
  if (file === null) return refuse(response, 404, "There is no such file here.")
  const body = await readFile(file)
  response.writeHead(200, { ...headers, "Content-Type": media[extname(file)] ?? "application/octet-stream", "Content-Length": body.length })
  response.end(request.method === "HEAD" ? undefined : body)
}

/** Whether the request names this machine: a foreign name that was pointed at the loopback address does not. */
function isOurs(request: IncomingMessage): boolean {
  const port = request.socket.localPort
  return ["localhost", "127.0.0.1"].some(
    (name) => request.headers.host === `${name}:${port}` || (port === 80 && request.headers.host === name),
  )
}

/** The file that an address means, or null where there is none inside the folder. Links out of the folder do not count as inside. */
async function within(root: string, address: string): Promise<string | null> {
  try {
    const path = decodeURIComponent(address.split(/[?#]/, 1)[0] ?? "/")
    if (path.includes("\0") || path.includes("\\") || path.split("/").includes("..")) return null
    const file = await realpath(join(root, path.endsWith("/") ? `${path}index.html` : path))
    return file.startsWith(root + sep) ? file : null
  } catch {
    return null
  }
}

function refuse(response: ServerResponse, status: number, sentence: string): void {
  if (response.headersSent) {
    response.end()
    return
  }
  response.writeHead(status, { ...headers, "Content-Type": "text/plain; charset=utf-8" })
  response.end(`${sentence}\n`)
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  serve().catch((wrong: unknown) => {
    console.error(wrong instanceof Error ? wrong.message : String(wrong))
    process.exitCode = 1
  })
}
