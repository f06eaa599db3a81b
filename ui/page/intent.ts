// How a block tells the page what a hand did: one bubbling event that carries an intent, and one that speaks. A block never writes a text,
// never touches the engine and knows no other cell; the row it stands in knows whose block it is, and one controller writes.
//
// Contract for the elements in blocks/:
//   - `<etamu-block>` is given `.block` (a Block).
//   - A click dispatches `new IntentEvent({ intent })`: one edit, one step of undo.
//   - A drag or a walk by arrow keys dispatches `new IntentEvent({ intent, gesture })` for every step, all with the same `gesture` (from
//     `newGesture()`), and once more with `ended: true` (with the last intent) when the hand lets go: the whole of it is one step of undo.
//   - What should be read aloud at rest (a reading taken by keyboard) is dispatched as `new SayEvent(text)`.
//   - Colours, faces and spacing come from the custom properties of page.css: --paper --sheet --ink --soft --faint --line --tint --accent
//     --warn --fault --text-face --title-face --mono-face. They follow light and dark by themselves.

import type { Intent } from "../../runtime/notice.ts"

export interface IntentDetail {
  readonly intent: Intent
  /** The same for every step of one drag or walk. */
  readonly gesture?: string
  /** The hand let go: what stands now stays. */
  readonly ended?: boolean
}

/** A hand asks for a change. Bubbles, and crosses shadow roots. */
export class IntentEvent extends CustomEvent<IntentDetail> {
  static readonly type = "etamu-intent"
  constructor(detail: IntentDetail) {
    super(IntentEvent.type, { detail, bubbles: true, composed: true })
  }
}

/** Text for the live region. Bubbles, and crosses shadow roots. */
export class SayEvent extends CustomEvent<string> {
  static readonly type = "etamu-say"
  constructor(text: string) {
    super(SayEvent.type, { detail: text, bubbles: true, composed: true })
  }
}

/** A name for one gesture, unlike any other. */
export function newGesture(): string {
  return crypto.randomUUID()
}

declare global {
  interface HTMLElementEventMap {
    "etamu-intent": IntentEvent
    "etamu-say": SayEvent
  }
}
