// The front door of the shelf: the notebooks kept in this browser.

export type { Locks } from "./lock.ts"
export { type Did, type Listed, type Loan, type LoanEvent, openShelf, type Room, type Shelf, type ShelfOptions } from "./shelf.ts"
