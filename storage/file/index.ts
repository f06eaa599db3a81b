// The front door of the notebook file: reading and writing both its forms, what a notebook is as it is kept, and the digests that name bytes.

export { pieces } from "./blob.ts"
export { mostCells, mostEnclosureBytes, mostTextBytes } from "./bounds.ts"
export { canonical, plain } from "./canonical.ts"
export { appended, type Entry, type Event, firstBreak, type TrailHead, trailHead } from "./chain.ts"
export { blobDigest, digest, type RunningDigest, runningDigest } from "./digest.ts"
export { type Kept, type KeptFinding, newlyKept, type Seal } from "./kept.ts"
export { mediaOf, notebookMedia } from "./media.ts"
export type { FileNotice } from "./notices.ts"
export { type PlainCell, type PlainOpened, plainCells, plainForm, readPlain } from "./plain.ts"
export { type Opened, readNotebook, type Standing } from "./read.ts"
export { type ByteStore, notebookFile, obstacles, writeNotebook } from "./write.ts"
export { writer } from "./writer.ts"
