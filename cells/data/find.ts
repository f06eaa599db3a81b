// DataSaid and a file → DataFinding. The order is that of the language: read, columns, make and where as written, total last. A fault in
// one column leaves the rest of the finding there to be seen.

import type { Input, Outcome, Work } from "../../runtime/kind.ts"
import type { Notice } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"
import { type Column, type RowIdentity, rowsPart } from "../table/column.ts"
import type { DataFinding, Profile } from "./finding.ts"
import * as say from "./notices.ts"
import { profile } from "./profile.ts"
import { fileTable } from "./read.ts"
import { afterSteps } from "./steps.ts"
import type { DataSaid } from "./words.ts"

export async function found(said: DataSaid, inputs: ReadonlyMap<Name, Input>, work: Work): Promise<Outcome<DataFinding>> {
  const { from } = said
  // The parse has said that there is no file to read.
  if (from === null) return { ok: false, found: null, notices: [] }
  const sha256 = work.fileHash(from.file)
  if (sha256 === null) return { ok: false, found: null, notices: [say.fileNotHere(from.file, from.at)] }
  let file: Awaited<ReturnType<typeof fileTable>>
  try {
    file = await fileTable(said, from, work)
  } catch (thrown) {
    if (thrown instanceof Error && thrown.name === "NoFile")
      return { ok: false, found: null, notices: [say.fileNotHere(from.file, from.at)] }
    throw thrown
  }
  if (file.table === null) return { ok: false, found: null, notices: file.notices }
  const done = await afterSteps(said, file.table, inputs, work)
  const profiles: Profile[] = []
  for (const [name, column] of done.columns) {
    profiles.push(await profile(name, column, () => work.checkpoint()))
    await work.checkpoint()
  }
  const parts: Record<string, Column | RowIdentity> = Object.fromEntries(done.columns)
  parts[rowsPart] = { file: from.file, sha256, records: done.records }
  const notices: readonly Notice[] = [...file.notices, ...done.notices]
  const finding: DataFinding = {
    columns: [...done.columns.keys()],
    rows: done.rows,
    parts,
    file: from.file,
    read: file.table.rows,
    kept: done.kept,
    dropped: done.dropped,
    total: done.total,
    profiles,
  }
  return { ok: !notices.some(({ level }) => level === "fault"), found: finding, notices }
}
