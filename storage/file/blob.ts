// Bytes in pieces: a Blob read a slice at a time, so that no file need ever lie in memory whole. Slices and not `stream()`, because not
// every browser lets a stream be iterated.

/** How much is read at a time. */
const pieceBytes = 1024 * 1024

/** What a Blob is put together of here. */
export type Part = Blob | Uint8Array<ArrayBuffer>

/** The bytes of a Blob, a piece at a time. */
export async function* pieces(blob: Blob): AsyncGenerator<Uint8Array<ArrayBuffer>> {
  for (let at = 0; at < blob.size; at += pieceBytes) yield await slice(blob, at, at + pieceBytes)
}

/** The bytes of a Blob from one place to just before another. */
export const slice = async (blob: Blob, from: number, to: number): Promise<Uint8Array<ArrayBuffer>> =>
  new Uint8Array(await blob.slice(from, to).arrayBuffer())

/** Whether the bytes are valid UTF-8 from end to end. */
export async function isText(blob: Blob): Promise<boolean> {
  const decoder = new TextDecoder("utf-8", { fatal: true })
  try {
    for await (const piece of pieces(blob)) decoder.decode(piece, { stream: true })
    decoder.decode()
    return true
  } catch (error) {
    // Only the decoder says TypeError; what the Blob itself may throw is not about its text.
    if (error instanceof TypeError) return false
    throw error
  }
}
