// What a note shows: its text.

import type { Block } from "../block.ts"
import type { NoteFinding } from "./find.ts"

export const shown = (finding: NoteFinding): readonly Block[] => [{ type: "prose", markdown: finding.markdown }]
