// UTF-8 checked while it arrives: a decoder would either put replacement characters in silently or fail without saying where. Works on
// chunks cut anywhere, also inside a character.

/** A byte that cannot stand where it stands; `offset` counts bytes from the beginning of the file. */
export type BadByte = { readonly offset: number; readonly byte: number }

export class Utf8Check {
  private passed = 0
  private needed = 0
  private low = 0x80
  private high = 0xbf
  private lead: BadByte = { offset: 0, byte: 0 }

  /** How many bytes of the file were seen so far. */
  get offset(): number {
    return this.passed
  }

  /** Counts bytes that are passed over, such as a byte-order mark. */
  skip(bytes: number): void {
    this.passed += bytes
  }

  /** The first bad byte of this chunk (the lead byte where a character is cut short), or null; after a bad byte the check is of no more use. */
  push(bytes: Uint8Array): BadByte | null {
    const length = bytes.length
    let at = 0
    while (at < length) {
      const byte = bytes[at] as number
      if (this.needed === 0) {
        if (byte >= 0x80) {
          if (byte < 0xc2 || byte > 0xf4) return { offset: this.passed + at, byte }
          this.lead = { offset: this.passed + at, byte }
          this.needed = byte < 0xe0 ? 1 : byte < 0xf0 ? 2 : 3
          // Overlong forms, surrogates and what lies beyond U+10FFFF are kept out by the range of the second byte (Unicode, table 3-7).
          this.low = byte === 0xe0 ? 0xa0 : byte === 0xf0 ? 0x90 : 0x80
          this.high = byte === 0xed ? 0x9f : byte === 0xf4 ? 0x8f : 0xbf
        }
      } else {
        if (byte < this.low || byte > this.high) return this.lead
        this.needed--
        this.low = 0x80
        this.high = 0xbf
      }
      at++
    }
    this.passed += length
    return null
  }

  /** The lead byte of a character that the file's end cut short, or null. */
  end(): BadByte | null {
    return this.needed > 0 ? this.lead : null
  }
}

const decoder = new TextDecoder("utf-8", { ignoreBOM: true })

/** The text of a stretch of bytes known to be UTF-8. */
export const text = (bytes: Uint8Array, from: number, to: number): string => decoder.decode(bytes.subarray(from, to))
