// Predictor notation (Wilkinson & Rogers 1973): text to a list of terms. `.` binds tightest, then `/`, then `*`, then `+` and `-` from
// left to right. The constant is the term `intercept`. What the calls compute is the design matrix's business, not this file's.

import type { SyntaxNode } from "@lezer/common"
import { nearest } from "../../runtime/nearest.ts"
import type { Place } from "../../runtime/notice.ts"
import type { Token } from "../../runtime/statement.ts"
import { reserved } from "../../runtime/tokens.ts"
import type { Name } from "../../runtime/value.ts"
import { depthOf, firstError, greatestDepth, tooLong } from "./expression-tree.ts"
import { functions } from "./functions.ts"
import {
  brokenPredictor,
  deepExpression,
  hugeNumber,
  interceptInside,
  nothingTakenAway,
  reservedName,
  settingOff,
  tooManyTerms,
  unknownMaker,
} from "./notices.ts"
import { parser } from "./predictor-parser.ts"
import type { Slip } from "./slip.ts"
import { placeIn, type Source, sourceOf, tokenFrom } from "./source.ts"

export type PieceCall = "itself" | "log" | "square_root" | "power" | "polynomial" | "natural_spline" | "periodic" | "category"

/** One variable of a term, as itself or through a call; `setting` is the power, degree, number of knots or period. */
export type PredictorPiece = { readonly variable: Name; readonly as: PieceCall; readonly setting: number | null; readonly at: Place }

/** A product of pieces, in the order written; `says` is its canonical text, such as `night.lot` or `polynomial(night, degree 2)`. */
export type PredictorTerm = { readonly pieces: readonly PredictorPiece[]; readonly says: string }

/** Terms expanded, each once, in order of degree within the order written (main effects before their interactions). */
export type Terms = { readonly intercept: boolean; readonly terms: readonly PredictorTerm[] }

/** A predictor may stand for this many terms once it is written out. */
export const greatestTerms = 10_000

/** The calls of a predictor, how each is written, and a line of help. */
export const makers: ReadonlyMap<PieceCall, { readonly form: string; readonly setting: string | null; readonly says: string }> = new Map([
  ["log", { form: "log(x)", setting: null, says: "natural logarithm of a number" }],
  ["square_root", { form: "square_root(x)", setting: null, says: "square root of a number" }],
  ["power", { form: "power(x, 2)", setting: "", says: "a power of a number" }],
  ["polynomial", { form: "polynomial(x, degree 3)", setting: "degree", says: "powers up to a degree, orthogonal over the rows used" }],
  [
    "natural_spline",
    { form: "natural_spline(x, knots 3)", setting: "knots", says: "a smooth curve with inner knots at equal shares of the rows" },
  ],
  ["periodic", { form: "periodic(x, period 365)", setting: "period", says: "a sine and a cosine" }],
  ["category", { form: "category(x)", setting: null, says: "a number taken as a category" }],
])

/** The terms these tokens say; `first` is the number of the first of them in its clause. */
export function termsFrom(
  tokens: readonly Token[],
  clause: number,
  first: number,
): { readonly terms: Terms | null; readonly slips: readonly Slip[] } {
  const source = sourceOf(tokens, clause, first)
  const long = tooLong(source)
  if (long !== null) return { terms: null, slips: [long] }
  const tree = parser.parse(source.text)
  const broken = firstError(tree)
  if (broken !== null) {
    const index = tokenFrom(source, broken)
    return { terms: null, slips: [brokenPredictor(source, index, callAround(source, index))] }
  }
  const all = placeIn(source, 0, source.text.length)
  if (depthOf(tree) > greatestDepth) return { terms: null, slips: [deepExpression(all, greatestDepth)] }
  const slips: Slip[] = []
  const root = tree.topNode.firstChild
  const expansion = new Expansion(source, slips)
  const said = root === null ? [] : [...expansion.terms(root, false).values()]
  if (slips.some((slip) => slip.level === "fault")) return { terms: null, slips }
  const terms = said.filter((term) => term.pieces.length > 0).sort((a, b) => a.pieces.length - b.pieces.length)
  return { terms: { intercept: expansion.intercept, terms }, slips }
}

/** The columns that terms read, each once, with where it stands first. */
export function variablesOf(terms: Terms): readonly { readonly name: Name; readonly at: Place }[] {
  const found = new Map<Name, Place>()
  for (const term of terms.terms) for (const piece of term.pieces) if (!found.has(piece.variable)) found.set(piece.variable, piece.at)
  return Array.from(found, ([name, at]) => ({ name, at }))
}

/** Terms by what makes them the same: their pieces in any order. The constant is the term without a piece. */
type TermSet = Map<string, PredictorTerm>

class Expansion {
  /** There until it is taken away. */
  intercept = true
  private readonly source: Source
  private readonly slips: Slip[]

  constructor(source: Source, slips: Slip[]) {
    this.source = source
    this.slips = slips
  }

  /** `joined` is true inside `.`, `*` and `/`, where the constant has no place. */
  terms(node: SyntaxNode, joined: boolean): TermSet {
    const [left, right] = termNodes(node)
    if (left === undefined) return this.leaf(node, joined)
    switch (node.name) {
      case "Sum":
        return this.sum(node, joined)
      case "Cross": {
        const a = this.terms(left, true)
        const b = right === undefined ? a : this.terms(right, true)
        return this.within(new Map([...a, ...without(b, a), ...without(this.products(a, b, node), a, b)]), node)
      }
      case "Nest": {
        const a = this.terms(left, true)
        const b = right === undefined ? a : this.terms(right, true)
        const together: TermSet = new Map()
        const whole = term([...a.values()].flatMap(({ pieces }) => pieces))
        together.set(keyOf(whole), whole)
        return this.within(new Map([...a, ...without(this.products(together, b, node), a)]), node)
      }
      case "Interaction": {
        const a = this.terms(left, true)
        return right === undefined ? a : this.products(a, this.terms(right, true), node)
      }
      case "Paren":
        return this.terms(left, joined)
      default:
        return this.leaf(node, joined)
    }
  }

  /** From left to right: each term is added, or takes away exactly the terms it stands for. */
  private sum(node: SyntaxNode, joined: boolean): TermSet {
    let all: TermSet = new Map()
    let takesAway = false
    for (let child = node.firstChild; child !== null; child = child.nextSibling) {
      if (child.name === "+" || child.name === "-") takesAway = child.name === "-"
      if (!isTerm(child)) continue
      const terms = this.terms(child, joined)
      if (takesAway) {
        for (const [key, term] of terms) {
          if (key === "") this.intercept = false
          else if (!all.delete(key)) this.slips.push(nothingTakenAway(this.at(child), term.says))
        }
      } else {
        if (terms.has("")) this.intercept = true
        for (const [key, term] of terms) if (!all.has(key)) all.set(key, term)
        all = this.within(all, node)
      }
    }
    return all
  }

  private products(a: TermSet, b: TermSet, node: SyntaxNode): TermSet {
    const all: TermSet = new Map()
    for (const first of a.values()) {
      for (const second of b.values()) {
        const product = term([...first.pieces, ...second.pieces])
        const key = keyOf(product)
        if (!all.has(key)) all.set(key, product)
        if (all.size > greatestTerms) return this.within(all, node)
      }
    }
    return all
  }

  /** Cut down to one term where there are too many: the fault is said once, and what follows stays small. */
  private within(terms: TermSet, node: SyntaxNode): TermSet {
    if (terms.size <= greatestTerms) return terms
    if (!this.slips.some(({ code }) => code === "predictor/too-many-terms")) this.slips.push(tooManyTerms(this.at(node), greatestTerms))
    return new Map([...terms].slice(0, 1))
  }

  private leaf(node: SyntaxNode, joined: boolean): TermSet {
    const column = node.name === "Made" ? node.getChild("Column") : node
    const variable = column === null ? "" : this.textOf(column).normalize("NFC")
    const at = this.at(node)
    if (node.name !== "Made" && variable === "intercept") {
      if (joined) this.slips.push(interceptInside(at))
      return new Map([["", term([])]])
    }
    if (column !== null && reserved.has(variable)) this.slips.push(reservedName(this.at(column), variable, "predictor"))
    const piece = node.name === "Made" ? this.made(node, variable, at) : { variable, as: "itself" as const, setting: null, at }
    const made = term([piece])
    return new Map([[keyOf(made), made]])
  }

  private made(node: SyntaxNode, variable: Name, at: Place): PredictorPiece {
    const word = node.getChild("Word")
    const name = word === null ? "" : this.textOf(word).normalize("NFC")
    const maker = [...makers.keys()].find((known) => known === name)
    const nothing: PredictorPiece = { variable, as: "itself", setting: null, at }
    if (maker === undefined) {
      const where = word === null ? at : this.at(word)
      const near = nearest(name, makers.keys())
      this.slips.push(unknownMaker(where, name, near, [...makers.keys()], functions.has(name)))
      return nothing
    }
    const wanted = makers.get(maker)?.setting ?? null
    const settings = node.getChildren("Setting")
    const [setting] = settings
    const off = (where: SyntaxNode, mend: Slip["mend"] = null): PredictorPiece => {
      this.slips.push(settingOff(this.at(where), name, makers.get(maker)?.form ?? name, mend))
      return nothing
    }
    if (wanted === null) return setting === undefined ? { variable, as: maker, setting: null, at } : off(setting)
    if (setting === undefined) return off(node)
    if (settings[1] !== undefined) return off(settings[1])
    const said = setting.getChild("Word")
    const label = said === null ? "" : this.textOf(said)
    const digits = setting.getChild("Number")
    const text = digits === null ? "" : this.textOf(digits)
    const value = (setting.getChild("-") === null ? 1 : -1) * Number(text)
    if (!Number.isFinite(value)) {
      this.slips.push(hugeNumber(this.at(setting), text))
      return nothing
    }
    if (label !== wanted) {
      const place = this.at(setting)
      const says = wanted === "" ? text : `${wanted} ${text}`
      return off(setting, { label: `Write ${says}`, puts: [{ from: place.from, to: place.to, text: says }] })
    }
    const whole = Number.isInteger(value) && value >= 1 && value <= 100
    const fits = maker === "power" ? value !== 0 : maker === "periodic" ? value > 0 : whole
    return fits ? { variable, as: maker, setting: value, at } : off(setting)
  }

  private at(node: SyntaxNode): Place {
    return placeIn(this.source, node.from, node.to)
  }

  private textOf(node: SyntaxNode): string {
    return this.source.text.slice(node.from, node.to)
  }
}

/** A product of pieces, each once. */
function term(pieces: readonly PredictorPiece[]): PredictorTerm {
  const each = new Map<string, PredictorPiece>()
  for (const piece of pieces) {
    const text = pieceText(piece)
    if (!each.has(text)) each.set(text, piece)
  }
  return { pieces: [...each.values()], says: [...each.keys()].join(".") }
}

function pieceText({ variable, as, setting }: PredictorPiece): string {
  if (as === "itself") return variable
  const label = makers.get(as)?.setting ?? null
  return label === null ? `${as}(${variable})` : `${as}(${variable}, ${label === "" ? "" : `${label} `}${setting})`
}

const keyOf = (of: PredictorTerm): string => of.pieces.map(pieceText).sort().join(".")

const without = (terms: TermSet, ...others: readonly TermSet[]): readonly (readonly [string, PredictorTerm])[] =>
  [...terms].filter(([key]) => !others.some((other) => other.has(key)))

const isTerm = (node: SyntaxNode): boolean => /^[A-Z]/.test(node.name) && node.name !== "Comment"

const termNodes = (node: SyntaxNode): readonly SyntaxNode[] => {
  if (node.name === "Made" || node.name === "Column") return []
  const nodes: SyntaxNode[] = []
  for (let child = node.firstChild; child !== null; child = child.nextSibling) {
    if (isTerm(child)) nodes.push(child)
  }
  return nodes
}

/** The name of the call whose bracket is open at this token; null outside of every call. */
function callAround(source: Source, index: number): string | null {
  const open: (string | null)[] = []
  for (let k = 0; k < index; k++) {
    const token = source.tokens[k]
    const before = source.tokens[k - 1]
    if (token?.text === "(") open.push(before?.type === "word" ? before.text : null)
    else if (token?.text === ")") open.pop()
  }
  return open.at(-1) ?? null
}
