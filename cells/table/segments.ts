// Columns that grow: filled segment by segment, and copied once into an array of their own at the end, so that a value holds no view into
// a larger buffer and growing never copies what is there.

const segmentLength = 65_536

export class GrowingNumbers {
  private readonly full: Float64Array[] = []
  private last = new Float64Array(segmentLength)
  private used = 0

  push(value: number): void {
    if (this.used === segmentLength) {
      this.full.push(this.last)
      this.last = new Float64Array(segmentLength)
      this.used = 0
    }
    this.last[this.used++] = value
  }

  /** All of it, in an array of its own; the segments are let go. */
  taken(): Float64Array {
    const all = new Float64Array(this.full.length * segmentLength + this.used)
    for (let i = 0; i < this.full.length; i++) all.set(this.full[i] as Float64Array, i * segmentLength)
    all.set(this.last.subarray(0, this.used), this.full.length * segmentLength)
    this.full.length = 0
    this.used = 0
    return all
  }
}

export class GrowingCodes {
  private readonly full: Int32Array[] = []
  private last = new Int32Array(segmentLength)
  private used = 0

  push(code: number): void {
    if (this.used === segmentLength) {
      this.full.push(this.last)
      this.last = new Int32Array(segmentLength)
      this.used = 0
    }
    this.last[this.used++] = code
  }

  /** All of it, in an array of its own; the segments are let go. */
  taken(): Int32Array {
    const all = new Int32Array(this.full.length * segmentLength + this.used)
    for (let i = 0; i < this.full.length; i++) all.set(this.full[i] as Int32Array, i * segmentLength)
    all.set(this.last.subarray(0, this.used), this.full.length * segmentLength)
    this.full.length = 0
    this.used = 0
    return all
  }
}
