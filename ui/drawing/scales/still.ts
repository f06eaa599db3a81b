// The still part of the two scales: both panels, the bridge between, and the texts around. It depends on the block, the layout and which
// candidate is previewed; what follows the pointer is drawn over it by pointer.ts.

import type { ScalesBlock } from "../../../cells/block.ts"
import type { Scene } from "../scene.ts"
import { bridgeMarks } from "./bridge-marks.ts"
import { headMarks } from "./head.ts"
import { LABEL_SIZE, type ScalesLayout } from "./layout.ts"
import { panelMarks } from "./panels.ts"
import { label } from "./pieces.ts"

/** The scene at rest; `preview` names the candidate whose ghost is shown. */
export function scalesScene(block: ScalesBlock, layout: ScalesLayout, preview: string | null): Scene {
  const ghost = preview === null ? null : (block.candidates.find((candidate) => candidate.link === preview) ?? null)
  const shown = ghost === layout.subject ? null : ghost
  return {
    width: layout.width,
    height: layout.height,
    marks: [
      ...bridgeMarks(block, layout, shown),
      ...panelMarks(block, layout, shown, "mean"),
      ...panelMarks(block, layout, shown, "predictor"),
      ...headMarks(block, layout),
      ...layout.held.map((line, i) => label(`held-${i}`, "held", 0, layout.heldTop + 12 + i * 15, LABEL_SIZE, "start", line)),
    ],
  }
}
