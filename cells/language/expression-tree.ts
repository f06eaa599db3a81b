// Expressions from text: tokens in, tree out, by expression.grammar. Reading is total: what does not read gives slips at their tokens,
// in the user's words. Which names are columns and which are cells is not known here.

import type { SyntaxNode, Tree } from "@lezer/common"
import { nearest } from "../../runtime/nearest.ts"
import type { Token } from "../../runtime/statement.ts"
import { reserved } from "../../runtime/tokens.ts"
import type { Expression, Operator } from "./expression.ts"
import { parser } from "./expression-parser.ts"
import { functions, modelFunctions } from "./functions.ts"
import {
  argumentsOff,
  brokenPlace,
  comparedWithMissing,
  deepExpression,
  hugeNumber,
  longExpression,
  reservedName,
  unknownEscape,
  unknownFunction,
} from "./notices.ts"
import type { Slip } from "./slip.ts"
import { placeIn, type Source, sourceOf, tokenFrom } from "./source.ts"

/** What an expression may hold beside columns and cells: `mu` or `eta` as a name, the numbers of a model. */
export type Allowed = ReadonlySet<"mu" | "eta" | "models">

export const nothingMore: Allowed = new Set()

/** Brackets and signs within one another: more than anyone writes, and few enough for every walk over the tree. */
export const greatestDepth = 1_000

/** Tokens of one expression or predictor: a list of many thousand values reads, a file pasted into a cell does not hold up the page. */
export const mostTokens = 50_000

/** The expression these tokens are; `first` is the number of the first of them in its clause. */
export function expressionFrom(
  tokens: readonly Token[],
  clause: number,
  first: number,
  allowed: Allowed = nothingMore,
): { readonly expression: Expression | null; readonly slips: readonly Slip[] } {
  const source = sourceOf(tokens, clause, first)
  const long = tooLong(source)
  if (long !== null) return { expression: null, slips: [long] }
  const tree = parser.parse(source.text)
  const broken = firstError(tree)
  if (broken !== null) return { expression: null, slips: [brokenPlace(source, tokenFrom(source, broken))] }
  if (depthOf(tree) > greatestDepth)
    return { expression: null, slips: [deepExpression(placeIn(source, 0, source.text.length), greatestDepth)] }
  const slips: Slip[] = []
  const root = tree.topNode.firstChild
  const expression = root === null ? null : new Reader(source, allowed, slips).read(root)
  return { expression: slips.some((slip) => slip.level === "fault") ? null : expression, slips }
}

/** Brackets and signs without end are told before a parser is asked, which would take long over them. */
export function tooLong(source: Source): Slip | null {
  const all = placeIn(source, 0, source.text.length)
  if (source.tokens.length > mostTokens) return longExpression(all, mostTokens)
  let [open, run, powers] = [0, 0, 0]
  for (const { text } of source.tokens) {
    if (text === "(") open++
    else if (text === ")") open--
    run = text === "-" || text === "not" ? run + 1 : 0
    if (text === "^") powers++
    if (Math.max(open, run, powers) > greatestDepth) return deepExpression(all, greatestDepth)
  }
  return null
}

/** Where a tree has its first error; null where it has none. */
export function firstError(tree: Tree): number | null {
  let at: number | null = null
  tree.iterate({
    enter: (node) => {
      if (node.type.isError && (at === null || node.from < at)) at = node.from
    },
  })
  return at
}

export function depthOf(tree: Tree): number {
  let depth = 0
  let deepest = 0
  tree.iterate({
    enter: () => {
      depth++
      if (depth > deepest) deepest = depth
    },
    leave: () => {
      depth--
    },
  })
  return deepest
}

/** The value of a number as written: a percentage is its decimal with the point moved, not a quotient. */
export const numberFrom = (text: string): number => (text.endsWith("%") ? Number(`${text.slice(0, -1)}e-2`) : Number(text))

/** What a text in double quotes says; null where something other than `\"` and `\\` follows a backslash. */
export function textFrom(quoted: string): string | null {
  const inside = quoted.slice(1, -1)
  return /\\[^"\\]/.test(inside.replaceAll("\\\\", "")) ? null : inside.replace(/\\(["\\])/g, "$1")
}

class Reader {
  private readonly source: Source
  private readonly allowed: Allowed
  private readonly slips: Slip[]

  constructor(source: Source, allowed: Allowed, slips: Slip[]) {
    this.source = source
    this.allowed = allowed
    this.slips = slips
  }

  read(node: SyntaxNode): Expression {
    const at = placeIn(this.source, node.from, node.to)
    const children = partNodes(node)
    const part = (k: number): Expression => {
      const child = children[k]
      return child === undefined ? { type: "missing", at } : this.read(child)
    }
    switch (node.name) {
      case "Paren":
        return part(0)
      case "Or":
      case "And":
        return { type: "pair", sign: node.name === "Or" ? "or" : "and", left: part(0), right: part(1), at }
      case "Not":
        return { type: "not", of: part(0), at }
      case "Negative":
        return { type: "minus", of: part(0), at }
      case "Comparison":
        return this.comparison(node, part(0), part(1))
      case "Sum":
      case "Product":
        return { type: "pair", sign: this.sign(node), left: part(0), right: part(1), at }
      case "Power":
        return { type: "pair", sign: "^", left: part(0), right: part(1), at }
      case "In":
        return { type: "in", of: part(0), list: this.list(node.getChild("List")), at }
      case "Call":
        return this.call(node)
      case "Number":
      case "Percent":
        return this.number(node)
      case "Text":
        return this.text(node)
      case "Truth":
        return { type: "truth", value: this.textOf(node) === "true", at }
      case "Name":
        return this.name(node)
      default:
        return { type: "missing", at }
    }
  }

  private list(node: SyntaxNode | null): readonly Expression[] {
    return node === null ? [] : partNodes(node).map((child) => this.read(child))
  }

  private comparison(node: SyntaxNode, left: Expression, right: Expression): Expression {
    const at = placeIn(this.source, node.from, node.to)
    const sign = this.sign(node)
    if (left.type === "missing" || right.type === "missing") {
      const other = partNodes(node)[left.type === "missing" ? 1 : 0]
      this.slips.push(comparedWithMissing(at, sign, other === undefined ? "x" : this.textOf(other)))
    }
    return { type: "pair", sign, left, right, at }
  }

  private call(node: SyntaxNode): Expression {
    const at = placeIn(this.source, node.from, node.to)
    const word = node.getChild("Word")
    const name = word === null ? "" : this.textOf(word).normalize("NFC")
    const of = this.list(node.getChild("Arguments"))
    const known = functions.get(name) ?? (this.allowed.has("models") ? modelFunctions.get(name) : undefined)
    const where = word === null ? at : placeIn(this.source, word.from, word.to)
    if (known === undefined) {
      const names = [...functions.keys(), ...(this.allowed.has("models") ? modelFunctions.keys() : [])]
      this.slips.push(unknownFunction(where, name, nearest(name, names), modelFunctions.has(name)))
    } else if (of.length < known.least || of.length > known.most) {
      this.slips.push(argumentsOff(at, name, known, of.length))
    }
    return { type: "call", name, of, at }
  }

  private number(node: SyntaxNode): Expression {
    const at = placeIn(this.source, node.from, node.to)
    const text = this.textOf(node)
    const value = numberFrom(text)
    if (!Number.isFinite(value)) this.slips.push(hugeNumber(at, text))
    return { type: "number", value, text, at }
  }

  private text(node: SyntaxNode): Expression {
    const at = placeIn(this.source, node.from, node.to)
    const text = textFrom(this.textOf(node))
    if (text === null) this.slips.push(unknownEscape(at, this.textOf(node)))
    return { type: "text", text: text ?? "", at }
  }

  private name(node: SyntaxNode): Expression {
    const at = placeIn(this.source, node.from, node.to)
    const name = this.textOf(node).normalize("NFC")
    if (name === "pi") return { type: "number", value: Math.PI, text: "pi", at }
    const allowed = (name === "mu" || name === "eta") && this.allowed.has(name)
    if (reserved.has(name) && !allowed) this.slips.push(reservedName(at, name, "expression"))
    return { type: "name", name, at }
  }

  private sign(node: SyntaxNode): Operator {
    for (let child = node.firstChild; child !== null; child = child.nextSibling) {
      const text = this.textOf(child)
      if (isOperator(text) && (child.name === "CompareOp" || child.name === text)) return text
    }
    return "+"
  }

  private textOf(node: SyntaxNode): string {
    return this.source.text.slice(node.from, node.to)
  }
}

const signs: ReadonlySet<string> = new Set(["+", "-", "*", "/", "^", "=", "!=", "<", "<=", ">", ">="])
const isOperator = (text: string): text is Operator => signs.has(text)

/** The parts of a node that are expressions: not its signs, brackets and commas, nor a comment. */
const partNodes = (node: SyntaxNode): readonly SyntaxNode[] => {
  const parts: SyntaxNode[] = []
  for (let child = node.firstChild; child !== null; child = child.nextSibling) {
    if (/^[A-Z]/.test(child.name) && !["CompareOp", "Comment", "Word", "List", "Arguments"].includes(child.name)) parts.push(child)
  }
  return parts
}
