// Makes the data of the samples: every setting, name and number is invented. A fixed seed and plain arithmetic, so that running it
// again gives the same files: node sample-notebooks/make-data.mjs

import { writeFileSync } from "node:fs"
import { join } from "node:path"

/** Uniform numbers in (0, 1): a 32-bit mixing generator (common practice), one stream a seed. */
function stream(seed) {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let t = state
    t = Math.imul(t ^ (t >>> 15), t | 1)
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61)
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296
  }
}

const binomial = (u, n, p) => Array.from({ length: n }, () => (u() < p ? 1 : 0)).reduce((a, b) => a + b, 0)
const poisson = (u, mean) => {
  // Waiting times of rate one until they exceed the mean.
  let [k, t] = [-1, 0]
  while (t < mean) {
    t -= Math.log(u())
    k += 1
  }
  return k
}
/** Gamma with a whole shape: a sum of exponentials. */
const gamma = (u, shape, mean) => Array.from({ length: shape }, () => -Math.log(u())).reduce((a, b) => a + b, 0) * (mean / shape)

const csv = (name, rows) => writeFileSync(join(import.meta.dirname, name), `${rows.map((row) => row.join(",")).join("\n")}\n`)

// Bottles: one living cell is enough to spoil a bottle, so the chance is 1 − exp(−c · cells^0.95): a complementary log-log line in
// the log of the number of cells.
{
  const u = stream(20_417)
  const doses = [1, 2, 4, 8, 16, 32, 64, 128, 256, 512]
  csv("bottles.csv", [
    ["cells", "bottles", "spoiled"],
    ...doses.map((cells) => [cells, 120, binomial(u, 120, 1 - Math.exp(-0.017 * cells ** 0.95))]),
  ])
}

// Winches: the rate of jams an hour is a sum (a dry part, a part for spray, a part for load), watched for different numbers of hours.
{
  const u = stream(5_113)
  const rows = [["quay", "spray", "load", "hours", "jams"]]
  for (const quay of ["inner", "outer"]) {
    for (const spray of ["none", "some", "heavy"]) {
      for (const load of [1, 2, 4, 6]) {
        const hours = 40 + Math.round(u() * 160)
        const rate = (quay === "outer" ? 0.06 : 0.02) + { none: 0, some: 0.05, heavy: 0.16 }[spray] + 0.022 * load
        rows.push([quay, spray, load, hours, poisson(u, rate * hours)])
      }
    }
  }
  csv("winches.csv", rows)
}

// Nets: hours to mend a torn net; the mean grows in proportion to the length of the tear and more slowly in practised hands, the
// spread in proportion to the mean.
{
  const u = stream(90_221)
  const rows = [["tear", "mender", "hours"]]
  for (let i = 0; i < 90; i++) {
    const mender = i % 3 === 0 ? "apprentice" : "practised"
    const tear = Math.round((0.3 + 5.7 * u() ** 1.4) * 10) / 10
    const mean = mender === "apprentice" ? 0.9 + 1.15 * tear : 0.5 + 0.7 * tear
    rows.push([tear.toFixed(1), mender, gamma(u, 6, mean).toFixed(2)])
  }
  csv("nets.csv", rows)
}
