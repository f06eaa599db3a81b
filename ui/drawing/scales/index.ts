// The two scales as a drawing: layout, the still scene, what follows the pointer, readings, and the words below.

export { type ScalesLayout, scalesLayout } from "./layout.ts"
export { pointerMarks } from "./pointer.ts"
export { type Pointing, pointed, type Reading, readingOf, readingSentence, steppedReading } from "./reading.ts"
export { scalesScene } from "./still.ts"
export { linkThumbnail } from "./thumbnail.ts"
export { ghostSays, pointsTable, scalesLegend } from "./words.ts"
