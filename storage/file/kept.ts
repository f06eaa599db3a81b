// A notebook as it is kept: the notebook itself and what a file holds beside it (when it was made and changed and by which program, what
// its cells had found, its trail, the seal it came with). File and shelf both keep this, and neither knows what a cell means.

import type { Cell, CellId, Enclosed, Notebook } from "../../runtime/document.ts"
import type { Json } from "../../runtime/value.ts"
import { appended, type Entry } from "./chain.ts"

/** What the notebook showed for one cell when it was kept: the numbers of the finding, not its bulk. */
export interface KeptFinding {
  readonly cell: CellId
  /** Names the work, on any machine: SHA-256 in lower-case hex. */
  readonly key: string
  readonly summary: Json
}

/** The last line of a file. Its signatures hold for as long as nothing before it changes. */
export interface Seal {
  /** Of all bytes before the line. */
  readonly sha256: string
  readonly trailSize: number
  /** The Merkle tree hash of the trail's entries. */
  readonly trailRoot: string
  readonly signatures: readonly Json[]
}

export interface Kept {
  readonly notebook: Notebook
  /** RFC 3339, UTC. */
  readonly made: string
  /** RFC 3339, UTC. */
  readonly changed: string
  /** Program and version that wrote it. */
  readonly writer: string
  readonly findings: readonly KeptFinding[]
  readonly trail: readonly Entry[]
  /** As it was read; null for a notebook that comes from no sealed file. */
  readonly seal: Seal | null
  /**
   * The first place that is not as it was written or sealed, in words: it is only read until the person decides. Null where all is whole, or
   * where that was decided. It is kept on the shelf and never in a file, since a file shows it by itself.
   */
  readonly doubt: string | null
}

/** A notebook that begins now, with the first entry of its trail. */
export function newlyKept(start: {
  readonly id: string
  readonly title: string
  readonly cells: readonly Cell[]
  readonly enclosures: readonly Enclosed[]
  /** Now, RFC 3339, UTC: handed in, since nothing here has a clock. */
  readonly time: string
  /** Who begins it, for the trail. */
  readonly by: string
  readonly writer: string
}): Kept {
  const { id, title, cells, enclosures, time, by, writer } = start
  return {
    notebook: { id, title, cells, enclosures, rest: null },
    made: time,
    changed: time,
    writer,
    findings: [],
    trail: appended([], { time, by, kind: "start", body: { id, title, writer } }),
    seal: null,
    doubt: null,
  }
}
