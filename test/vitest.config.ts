// Three projects: node (everything without a page), browser (in a real browser, by vitest), end-to-end (the built program, driven as a
// person would). The browser is looked for only when a project that needs one is asked for.

import { existsSync } from "node:fs"
import { fileURLToPath } from "node:url"
import { playwright } from "@vitest/browser-playwright"
import { defineConfig } from "vitest/config"
import { browserArguments, browserPath } from "../ui/build/browser.mjs"

const root = fileURLToPath(new URL("..", import.meta.url))
const asked = process.argv.filter((_, i) => process.argv[i - 1] === "--project")
const wants = (project: string): boolean => asked.length === 0 || asked.includes(project)
const browserTests = existsSync(`${root}/test/browser`)

export default defineConfig({
  root,
  cacheDir: "node_modules/.cache/vite",
  test: {
    projects: [
      {
        test: {
          name: "node",
          include: ["test/**/*.test.ts"],
          exclude: ["test/browser/**", "test/end-to-end/**"],
          testTimeout: 30_000,
        },
      },
      ...(browserTests && wants("browser")
        ? [
            {
              server: {
                headers: { "Cross-Origin-Opener-Policy": "same-origin", "Cross-Origin-Embedder-Policy": "require-corp" },
              },
              optimizeDeps: {
                include: [
                  "lit",
                  "lit/directives/ref.js",
                  "lit/directives/repeat.js",
                  "d3",
                  "idb",
                  "ml-matrix",
                  "codemirror",
                  "@codemirror/autocomplete",
                  "@codemirror/commands",
                  "@codemirror/lint",
                  "@codemirror/state",
                  "@codemirror/view",
                  "@lezer/common",
                  "@lezer/lr",
                  "@noble/hashes/sha2.js",
                  "@stdlib/math-base-special-digamma",
                  "@stdlib/math-base-special-erfcx",
                  "@stdlib/math-base-special-gammaln",
                  "@stdlib/math-base-special-trigamma",
                  "canonicalize",
                  "marked",
                  "valibot",
                ],
              },
              test: {
                name: "browser",
                setupFiles: ["test/browser/setup.ts"],
                globalSetup: ["test/browser/same-bits-in-node.ts"],
                include: ["test/browser/**/*.test.ts"],
                browser: {
                  enabled: true,
                  headless: true,
                  screenshotFailures: false,
                  provider: playwright({ launchOptions: { executablePath: browserPath(), args: browserArguments } }),
                  instances: [{ browser: "chromium" as const }],
                },
              },
            },
          ]
        : []),
      {
        test: {
          name: "end-to-end",
          include: ["test/end-to-end/**/*.test.ts"],
          testTimeout: 120_000,
          hookTimeout: 120_000,
          fileParallelism: false,
        },
      },
    ],
  },
})
