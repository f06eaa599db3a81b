// Makes a fresh clone ready: the right Node, the packages of the lock file and, with `--with-browser`, a browser for the tests. Uses only
// what Node brings along, and does nothing at all when everything is in place. Whether packages are current is told by a hash of the lock
// file, since a checkout does not keep file times.

import { spawnSync } from "node:child_process"
import { createHash } from "node:crypto"
import { existsSync, readFileSync, writeFileSync } from "node:fs"
import { join } from "node:path"
import { fileURLToPath } from "node:url"
import { foundBrowser } from "./browser.mjs"

const root = fileURLToPath(new URL("../..", import.meta.url))
const [major, minor] = process.versions.node.split(".").map(Number)

/** Ends the set-up with one clear sentence. */
function stop(sentence) {
  console.error(sentence)
  process.exit(1)
}

/** Runs a program and gives whether it ended well. */
function ran(program, words, how = {}) {
  return spawnSync(program, words, { cwd: root, stdio: "inherit", ...how }).status === 0
}

if (major < 20 || (major === 20 && minor < 19)) stop(`Node 20.19 or newer is needed, and this is ${process.version}.`)

installPackages()
if (process.argv.includes("--with-browser")) installBrowser()

function installPackages() {
  const mark = join(root, "node_modules", ".lock-hash")
  const hash = createHash("sha256")
    .update(readFileSync(join(root, "package-lock.json")))
    .update(`${major} ${process.platform} ${process.arch}`)
    .digest("hex")
  if (existsSync(mark) && readFileSync(mark, "utf8") === hash) return
  console.log("Installing the packages of package-lock.json.")
  const npm = process.env.npm_execpath
  const well = npm ? ran(process.execPath, [npm, "ci"]) : ran("npm", ["ci"], { shell: process.platform === "win32" })
  if (!well) stop("The packages could not be installed: see what npm said above.")
  writeFileSync(mark, hash)
}

function installBrowser() {
  let found = null
  try {
    found = foundBrowser()
  } catch (wrong) {
    stop(wrong.message)
  }
  if (found !== null) return
  const debian = process.platform === "linux" && existsSync("/etc/debian_version")
  if (!debian || process.getuid?.() !== 0) {
    stop("The tests need a Chromium or Chrome: install one, or set ETAMU_BROWSER to the path of its program.")
  }
  const quiet = { env: { ...process.env, DEBIAN_FRONTEND: "noninteractive" } }
  console.log("No browser was found, and the tests need one: installing the Debian package chromium.")
  if (ran("apt-get", ["install", "-y", "--no-install-recommends", "chromium"], quiet)) return
  console.log("The list of packages may be out of date: fetching it, then trying once more.")
  if (ran("apt-get", ["update"], quiet) && ran("apt-get", ["install", "-y", "--no-install-recommends", "chromium"], quiet)) return
  stop("The Debian package chromium could not be installed: install a Chromium, or set ETAMU_BROWSER to the path of its program.")
}
