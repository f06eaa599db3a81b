// Base64 (RFC 4648 §4) for enclosures that are not text. Reading is strict: padding is there, nothing else is, and unused bits are zero, so
// that the same bytes have one writing only. Written out here because Node 20 has no such pair of functions that browsers have too.

const alphabet = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/"
const units = Uint8Array.from(alphabet, (letter) => letter.charCodeAt(0))
const notInAlphabet = 255
const values = new Uint8Array(256).fill(notInAlphabet)
for (const [value, unit] of units.entries()) values[unit] = value
const padding = "=".charCodeAt(0)

/** The bytes in base64. */
export function base64(bytes: Uint8Array): string {
  const out = new Uint8Array(Math.ceil(bytes.length / 3) * 4).fill(padding)
  const value = (i: number): number => bytes[i] ?? 0
  const unit = (sextet: number): number => units[sextet & 63] ?? 0
  for (let i = 0, o = 0; i < bytes.length; i += 3, o += 4) {
    const three = (value(i) << 16) | (value(i + 1) << 8) | value(i + 2)
    out[o] = unit(three >> 18)
    out[o + 1] = unit(three >> 12)
    if (i + 1 < bytes.length) out[o + 2] = unit(three >> 6)
    if (i + 2 < bytes.length) out[o + 3] = unit(three)
  }
  return new TextDecoder().decode(out)
}

/** The bytes that a text in base64 stands for, or null where it is not base64. */
export function bytesOfBase64(text: string): Uint8Array<ArrayBuffer> | null {
  if (text.length % 4 !== 0) return null
  const padded = text.endsWith("==") ? 2 : text.endsWith("=") ? 1 : 0
  const letters = text.length - padded
  const out = new Uint8Array((text.length / 4) * 3 - padded)
  let bits = 0
  let held = 0
  let o = 0
  for (let i = 0; i < letters; i += 1) {
    const unit = text.charCodeAt(i)
    const sextet = unit < 256 ? (values[unit] ?? notInAlphabet) : notInAlphabet
    if (sextet === notInAlphabet) return null
    held = (held << 6) | sextet
    bits += 6
    if (bits >= 8) {
      bits -= 8
      out[o] = held >> bits
      o += 1
      held &= (1 << bits) - 1
    }
  }
  return held === 0 ? out : null
}
