// Long loops over rows, cut into blocks with a checkpoint after each, so that work on a large table can be given up within moments.

/** Rows between two checkpoints: a few milliseconds of any loop here. */
const rowsInBlock = 1 << 17

export type Pause = () => Promise<void>

/** Calls `body` for rows `from` up to before `to`, block after block. When `pause` rejects, so does this. */
export async function inBlocks(rows: number, pause: Pause, body: (from: number, to: number) => void): Promise<void> {
  for (let from = 0; from < rows; from += rowsInBlock) {
    body(from, Math.min(rows, from + rowsInBlock))
    await pause()
  }
}
