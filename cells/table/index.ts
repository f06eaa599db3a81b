// The front door of tables: columns as values (column.ts is read directly where only its types are needed), and files read into them.

export type { CodedColumn, Column, ColumnType, NumberColumn, RowIdentity, Table, TableParts } from "./column.ts"
export { rowsPart } from "./column.ts"
export type { Broken, Oddities } from "./csv.ts"
export { longestField } from "./csv.ts"
export { dateText, dayOf } from "./date.ts"
export { type Dialect, meansMissing, suggestedSeparator } from "./dialect.ts"
export type { Evidence, Example } from "./evidence.ts"
export { type Headed, headText, nameFrom, namesFor } from "./header.ts"
export type { Misfit, MisfitReason, Misfits } from "./misfit.ts"
export { type Doubt, isRatherText, type Proposal, type ProposedColumn, type ProposedMissing, proposal } from "./proposal.ts"
export { type ColumnRead, type Met, ordered } from "./readers.ts"
export { type ColumnResult, type ColumnTask, type Plan, type Ragged, type Reading, readBytes, readTable } from "./reading.ts"
