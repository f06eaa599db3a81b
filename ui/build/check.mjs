// The one test command: builds, checks types, lints, looks for dead code, then runs all tests. With words after it (`npm test -- graph`)
// it runs only the tests whose file matches, and leaves the other checks out.

import { spawnSync } from "node:child_process"
import { join } from "node:path"
import { fileURLToPath } from "node:url"

const root = fileURLToPath(new URL("../..", import.meta.url))
const words = process.argv.slice(2)

/** Runs one program of the project's own packages; ends the check at the first that fails. */
function step(title, script, ...rest) {
  console.log(`\n— ${title}`)
  const ended = spawnSync(process.execPath, [join(root, script), ...rest], { cwd: root, stdio: "inherit" })
  if (ended.status !== 0) process.exit(ended.status ?? 1)
}

step("build", "ui/build/build.mjs")
if (words.length === 0) {
  step("types", "node_modules/typescript/bin/tsc", "-b")
  step("lint and format", "node_modules/@biomejs/biome/bin/biome", "ci", "--colors=off", ".")
  step("dead code", "node_modules/knip/bin/knip.js", "--no-progress")
}
step("tests", "node_modules/vitest/vitest.mjs", "run", "--config", "test/vitest.config.ts", ...words)
