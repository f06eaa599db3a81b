// Slips: what is wrong inside one clause, before it is known which clause of which cell it is. A slip may carry the tokens that would
// stand there instead; from that and the clause comes a notice with a mend.

import type { Notice } from "../../runtime/notice.ts"
import type { Clause } from "../../runtime/statement.ts"
import type { Trouble } from "./expression.ts"

/** Text to stand in place of the tokens `from` up to before `to`, counted as in a Place. */
export type Put = { readonly from: number; readonly to: number; readonly text: string }

export type Slip = Trouble & {
  readonly level: "fault" | "warning"
  readonly mend: { readonly label: string; readonly puts: readonly Put[] } | null
}

/** A slip as a notice. `nth` counts the clauses with this keyword; without a clause (a heading) there is nothing a click could rewrite. */
export const noticeFrom = (slip: Slip, clause: Clause | null, nth: number): Notice => ({
  level: slip.level,
  code: slip.code,
  text: slip.text,
  hint: slip.hint,
  clause: clause === null ? null : clause.keyword,
  at: slip.at,
  mend:
    clause === null || slip.mend === null
      ? null
      : { label: slip.mend.label, edits: [{ cell: null, clause: clause.keyword, nth, says: saidWith(clause, slip.mend.puts) }] },
})

/** Trouble met in evaluating, as a fault of the clause it stands in. */
export const faultFrom = (trouble: Trouble, clause: string | null): Notice => ({
  level: "fault",
  code: trouble.code,
  text: trouble.text,
  hint: trouble.hint,
  clause,
  at: trouble.at,
  mend: null,
})

/** A doubt met in evaluating, as a warning of the clause it stands in. */
export const warningFrom = (doubt: Trouble, clause: string | null): Notice => ({ ...faultFrom(doubt, clause), level: "warning" })

/** What a clause says after its keyword, with other text in place of some of its tokens; everything else as written. */
export function saidWith(clause: Clause, puts: readonly Put[]): string {
  let says = ""
  let end = clause.tokens[0]?.from ?? 0
  for (let k = 0; k < clause.tokens.length; k++) {
    const token = clause.tokens[k]
    if (token === undefined) break
    const put = puts.find(({ from, to }) => k + 1 >= from && k + 1 < Math.max(to, from + 1))
    const gap = token.from > end ? " " : ""
    if (put === undefined) says += gap + token.text
    else if (put.from === k + 1) says += gap + put.text + (put.to <= put.from ? ` ${token.text}` : "")
    end = token.to
  }
  const past = puts.find(({ from }) => from > clause.tokens.length)
  return past === undefined ? says : `${says} ${past.text}`.trim()
}
