// `npm run bench`: how long things take, in one run and as ratios, each a median of interleaved rounds. Nothing is held to a bound here:
// a machine that is busy is no fault of the program.

import { spawnSync } from "node:child_process"
import { fileURLToPath } from "node:url"
import { kinds } from "../../cells/index.ts"
import { type Fit, fit } from "../../cells/statistics/fit.ts"
import type { LinkSpec, Problem } from "../../cells/statistics/problem.ts"
import { type Dialect, readTable } from "../../cells/table/index.ts"
import { words } from "../../cells/words.ts"
import { createEngine, createEvaluator } from "../../runtime/index.ts"
import { cases, columnsOf, p, predictorOf, problemOf, responseOf, sumOf, withFactor } from "./data.ts"
import { designMatrix, textbook } from "./textbook.ts"
import { type Contestant, medians, milliseconds, ratio, rounds, table } from "./timing.ts"

const says = (line: string): boolean => process.stdout.write(`${line}\n`)

const turn = (): Promise<void> => new Promise((done) => setImmediate(done))

async function fitted(problem: Problem, near: Fit | null = null): Promise<Fit> {
  const found = await fit(problem, turn, near)
  if (!found.ok) throw new Error(`${found.why}: ${found.detail}`)
  return found.fit
}

/** A fit of 10 columns against one read of them and against a textbook's loop. */
async function fits(): Promise<void> {
  const lines: string[][] = []
  for (const n of [10_000, 100_000, 1_000_000]) {
    const columns = columnsOf(n)
    const eta = predictorOf(columns)
    const X = designMatrix(columns)
    for (const each of cases) {
      const y = responseOf(each.family, each.link, eta)
      const problem = problemOf(each.family, each.link, columns, y)
      const own = await fitted(problem)
      const theirs = textbook(each, X, y)
      const gap = Math.abs((own.deviance ?? Number.NaN) / theirs.deviance - 1)
      const contestants: Contestant[] = [
        { name: "fit", run: () => fitted(problem) },
        // One column copied makes it another design to the program, and nothing made for the last fit serves this one.
        {
          name: "cold",
          run: () => fitted(problemOf(each.family, each.link, [(columns[0] as Float64Array).slice(), ...columns.slice(1)], y)),
        },
        { name: "read", run: () => sumOf([...columns, y]) },
      ]
      // A round of the textbook's is given up where it would take the better part of the run.
      if (n <= 100_000) contestants.push({ name: "textbook", run: () => textbook(each, X, y) })
      const times = await medians(contestants)
      const [own1, cold, read] = [times.get("fit") as number, times.get("cold") as number, times.get("read") as number]
      const book = times.get("textbook")
      lines.push([
        `${n.toLocaleString("en")} × ${p} ${each.family} ${each.link}`,
        milliseconds(own1),
        ratio(own1, read),
        milliseconds(cold),
        ratio(cold, read),
        book === undefined ? "not run" : ratio(book, cold),
        gap.toExponential(0),
      ])
    }
  }
  says(
    `\nA fit with errors, tests and certificate: over columns fitted before, as when a link is switched, and cold; medians of ${rounds}\n`,
  )
  says(table(["", "switched", "in reads", "cold", "in reads", "textbook takes", "deviances apart"], lines))
}

/** Eight candidate links: one after the other over the same columns, which share their ground, and each by itself. */
async function links(): Promise<void> {
  const specs: readonly LinkSpec[] = [
    ...["logit", "probit", "cauchit", "cloglog", "loglog"].map((name) => ({ name, parameters: [] })),
    { name: "aranda_ordaz", parameters: [0.5] },
    { name: "aranda_ordaz", parameters: [2] },
    { name: "symmetric_power", parameters: [0.5] },
  ]
  const lines: string[][] = []
  for (const n of [1_000, 10_000, 100_000]) {
    const columns = columnsOf(n)
    const y = responseOf("binomial", "logit", predictorOf(columns))
    const shared = problemOf("binomial", "logit", columns, y)
    // Columns copied beforehand are others to the program, and nothing made for one fit serves the next.
    const apart = specs.map((link) => ({
      ...problemOf(
        "binomial",
        "logit",
        columns.map((x) => x.slice()),
        y,
      ),
      link,
    }))
    const times = await medians([
      {
        name: "together",
        run: async () => {
          for (const link of specs) await fitted({ ...shared, link })
        },
      },
      {
        name: "apart",
        run: async () => {
          for (const problem of apart) await fitted(problem)
        },
      },
    ])
    const [together, alone] = [times.get("together") as number, times.get("apart") as number]
    lines.push([`${n.toLocaleString("en")} × ${p}`, milliseconds(together), milliseconds(alone), ratio(alone, together)])
  }
  says(`\n${specs.length} candidate links of a binomial family; medians of ${rounds}\n`)
  says(table(["", "together", "apart", ""], lines))
}

/** A factor of many levels against one of few. */
async function factors(): Promise<void> {
  const lines: string[][] = []
  for (const n of [20_000, 100_000, 1_000_000]) {
    const columns = columnsOf(n)
    const plain = problemOf("binomial", "logit", columns, responseOf("binomial", "logit", predictorOf(columns)))
    const [few, many] = [withFactor(plain, 5), withFactor(plain, 500)]
    const times = await medians([
      { name: "few", run: () => fitted(few) },
      { name: "many", run: () => fitted(many) },
    ])
    const [a, b] = [times.get("few") as number, times.get("many") as number]
    lines.push([`${n.toLocaleString("en")} rows`, milliseconds(a), milliseconds(b), ratio(b, a)])
  }
  says(`\nA factor beside four numbers, binomial logit; medians of ${rounds}\n`)
  says(table(["", "5 levels", "500 levels", ""], lines))
}

/** A file of a million records and ten numbers. */
async function reading(): Promise<void> {
  const n = 1_000_000
  const columns = [...columnsOf(n), columnsOf(n)[0] as Float64Array]
  const parts: Uint8Array[] = []
  const encoder = new TextEncoder()
  parts.push(encoder.encode(`${columns.map((_, j) => `x${j}`).join(",")}\n`))
  for (let from = 0; from < n; from += 5000) {
    let text = ""
    for (let i = from; i < from + 5000; i++) text += `${columns.map((x) => (x[i] as number).toFixed(4)).join(",")}\n`
    parts.push(encoder.encode(text))
  }
  const size = parts.reduce((sum, part) => sum + part.length, 0)
  const file = async function* (): AsyncGenerator<Uint8Array> {
    yield* parts
  }
  const dialect: Dialect = { separator: ",", decimal: ".", header: true, missing: [] }
  const read = (): Promise<unknown> =>
    readTable(file(), dialect, (heads) => heads.map(() => ({ do: "read", type: "number", levels: null })), turn)
  const times = await medians([
    { name: "csv", run: read },
    {
      name: "bytes",
      run: () => {
        let sum = 0
        for (const part of parts) for (let i = 0; i < part.length; i++) sum += part[i] as number
        return sum
      },
    },
  ])
  const [csv, bytes] = [times.get("csv") as number, times.get("bytes") as number]
  says(`\nA file of ${n.toLocaleString("en")} records × 10 numbers, ${(size / 1e6).toFixed(0)} MB; medians of ${rounds}\n`)
  says(`  read into columns in ${milliseconds(csv)}, ${(size / 1e3 / csv).toFixed(0)} MB/s, ${ratio(csv, bytes)} one look at every byte`)
}

/** What a hand feels: a notebook of a thousand rows, through engine and evaluator in this thread, which remember as little as they can. */
async function gestures(): Promise<void> {
  const n = 1000
  const columns = columnsOf(n)
  const y = responseOf("binomial", "logit", predictorOf(columns))
  const problem = problemOf("binomial", "logit", columns, y)
  const near = await fitted(problem)
  const others = ["probit", "cloglog", "cauchit", "loglog", "logit"]
  let turnOf = 0
  const other = (): Problem => ({ ...problem, link: { name: others[turnOf++ % 5] as string, parameters: [] } })

  const heads = [...columns.map((_, j) => `x${j + 1}`), "y"]
  const text = `${heads.join(",")}\n${Array.from(y, (v, i) => [...columns.map((x) => (x[i] as number).toFixed(6)), v].join(",")).join("\n")}\n`
  const model = (link: string): string =>
    `model m\n  data d\n  response y\n  family binomial\n  link ${link}\n  predictor ${heads.slice(0, -1).join(" + ")}`
  const dial = (thousandths: number): string => `dial a\n  from 0 to 1\n  step 0.001\n  start 0.${100 + thousandths}`
  const data = `data d\n  from "d.csv"\n${heads.map((head) => `  column ${head} ${head === "y" ? "count" : "number"}`).join("\n")}`
  const texts = [data, dial(0), model("logit"), "value at = mean_at(m, x1 = a)", model("aranda_ordaz(a)").replace("model m", "model bent")]
  const bytes = new TextEncoder().encode(text)
  const evaluator = createEvaluator({
    kinds,
    bytes: async function* () {
      yield bytes
    },
    pause: turn,
    now: () => performance.now(),
  })
  const engine = createEngine({
    words,
    evaluator,
    memoBytes: 0,
    notebook: {
      id: "bench",
      title: "",
      cells: texts.map((cell, i) => ({ id: `c${i}`, text: cell })),
      enclosures: [{ name: "d.csv", media: "text/csv", size: bytes.length, sha256: "0".repeat(64) }],
      rest: null,
    },
  })
  await engine.settled()
  for (const { id } of engine.notebook.cells) {
    const state = engine.state(id)
    if (state.status !== "ready") throw new Error(`the notebook of the gestures is not well: ${JSON.stringify(state)}`)
  }
  const write = async (cell: number, says: string, gesture: string | null): Promise<void> => {
    engine.dispatch({ changes: [{ type: "write", id: `c${cell}`, text: says }] }, ...(gesture === null ? [] : [{ gesture }]))
    await engine.settled()
  }
  const times = await medians(
    [
      { name: "a fit of another link, beside a finished fit", run: () => fitted(other()) },
      { name: "the same from the coefficients of the finished fit", run: () => fitted(other(), near) },
      {
        name: "the clause link rewritten, through engine and evaluator, all that hangs on it",
        run: () => write(2, model(others[turnOf++ % 5] as string), null),
      },
      { name: "a step of a dial: a value by it, and a model whose link it bends", run: () => write(1, dial(turnOf++ % 800), "drag") },
    ],
    60,
  )
  says(`\nA thousand rows × ${p}, binomial; medians of 60\n`)
  says(
    table(
      ["", "takes"],
      [...times].map(([name, time]) => [name, milliseconds(time)]),
    ),
  )
}

/** The most memory that one process needed for one fit of a million rows, the data among it. */
async function memory(): Promise<void> {
  const own = fileURLToPath(import.meta.url)
  const asked = (what: string): number => Number(spawnSync(process.execPath, [own, what], { encoding: "utf8" }).stdout)
  const [before, after] = [asked("--memory-of-data"), asked("--memory-of-fit")]
  says("\nPeak memory of a process, 1,000,000 × 10, binomial logit\n")
  says(
    `  the data ${(before / 1024).toFixed(0)} MB, with a fit ${(after / 1024).toFixed(0)} MB: ${ratio(after - before, 80_000)} the 80 MB of the columns for the fit`,
  )
}

async function peak(fits: boolean): Promise<void> {
  const columns = columnsOf(1_000_000)
  const problem = problemOf("binomial", "logit", columns, responseOf("binomial", "logit", predictorOf(columns)))
  if (fits) await fitted(problem)
  says(String(process.resourceUsage().maxRSS))
}

// Memory first: a process starts out with the peak of the one that starts it.
const parts: Readonly<Record<string, () => Promise<void>>> = { memory, fits, links, factors, reading, gestures }

const [asked] = process.argv.slice(2)
if (asked === "--memory-of-data" || asked === "--memory-of-fit") await peak(asked === "--memory-of-fit")
else for (const [name, part] of Object.entries(parts)) if (asked === undefined || asked === name) await part()
