// Where a Chromium is on this machine, and how it is started for tests. Looks at ETAMU_BROWSER first, then at the usual places.

import { existsSync } from "node:fs"
import { join } from "node:path"

const environment = process.env

/** Places a browser usually is, by platform. */
function places() {
  if (process.platform === "darwin") {
    return ["/Applications/Google Chrome.app/Contents/MacOS/Google Chrome", "/Applications/Chromium.app/Contents/MacOS/Chromium"]
  }
  if (process.platform === "win32") {
    return ["ProgramFiles", "ProgramFiles(x86)", "LOCALAPPDATA"]
      .flatMap((name) => environment[name] ?? [])
      .map((folder) => join(folder, "Google", "Chrome", "Application", "chrome.exe"))
  }
  return [
    "/usr/bin/chromium",
    "/usr/bin/chromium-browser",
    "/usr/bin/google-chrome-stable",
    "/usr/bin/google-chrome",
    "/opt/google/chrome/chrome",
    "/snap/bin/chromium",
  ]
}

/**
 * The path of a browser, or null where there is none.
 * @throws Error when ETAMU_BROWSER names a file that is not there
 */
export function foundBrowser() {
  const said = environment.ETAMU_BROWSER
  if (said !== undefined && said !== "") {
    if (!existsSync(said)) throw new Error(`ETAMU_BROWSER names ${said}, and there is no such file.`)
    return said
  }
  return places().find((place) => existsSync(place)) ?? null
}

/**
 * The path of a browser.
 * @throws Error in one clear sentence when there is none
 */
export function browserPath() {
  const found = foundBrowser()
  if (found === null) {
    throw new Error("The tests need a Chromium or Chrome: install one, or set ETAMU_BROWSER to the path of its program.")
  }
  return found
}

/** Keeps a headless browser from calling home and from needing a graphics card. */
export const browserArguments = [
  "--no-sandbox",
  "--disable-gpu",
  "--disable-quic",
  "--no-first-run",
  "--disable-background-networking",
  "--disable-component-update",
  "--disable-sync",
]
