// The one live editor: a statement under the hand. It is fetched when a hand first goes into a statement, keeps no history of its own (the
// notebook has the only one) and says every change by an event. Colours come from the same marks as those of statements that stand still.

import {
  acceptCompletion,
  autocompletion,
  type Completion,
  type CompletionContext,
  type CompletionResult,
  closeCompletion,
  completionKeymap,
  completionStatus,
  selectedCompletion,
  startCompletion,
} from "@codemirror/autocomplete"
import { defaultKeymap, insertNewline } from "@codemirror/commands"
import { type Diagnostic, lintKeymap, setDiagnostics } from "@codemirror/lint"
import { Annotation, EditorSelection, EditorState, Prec, type Range, StateField } from "@codemirror/state"
import { Decoration, type DecorationSet, keymap } from "@codemirror/view"
import { EditorView } from "codemirror"
import type { Intent, Notice } from "../../../runtime/notice.ts"
import { textRange } from "../../../runtime/place.ts"
import { IntentEvent } from "../intent.ts"
import { completion, type Surroundings } from "./completion.ts"
import { editorInk, ink } from "./ink.ts"
import { marks } from "./marks.ts"
import { readingOf } from "./reading.ts"

/** The text changed under the hand. */
export class TextEvent extends CustomEvent<string> {
  static readonly type = "etamu-text"
  constructor(text: string) {
    super(TextEvent.type, { detail: text, bubbles: true })
  }
}

/** The hand leaves the statement by a key: where to. */
export class LeaveEvent extends CustomEvent<"stay" | "above" | "below"> {
  static readonly type = "etamu-leave"
  constructor(to: "stay" | "above" | "below") {
    super(LeaveEvent.type, { detail: to, bubbles: true })
  }
}

/** Marks a change that came from outside (undo, a mend), which is not to be told again. */
const outside = Annotation.define<boolean>()

export class StatementEditor extends HTMLElement {
  /** Asked at each completion, so that it is never out of date. */
  surroundings: () => Surroundings | null = () => null
  #view: EditorView | null = null
  #text = ""
  #notices: readonly Notice[] = []
  #label = ""
  #start: { at: number; offer: boolean } | null = null

  get text(): string {
    return this.#text
  }

  /** Written to when the text changes elsewhere; the caret stays where it was, as far as that place is still there. */
  set text(text: string) {
    this.#text = text.replaceAll("\r\n", "\n")
    const view = this.#view
    const now = view?.state.doc.toString() ?? ""
    if (view === null || now === this.#text) return
    const { from, to, insert } = difference(now, this.#text)
    view.dispatch({ changes: { from, to, insert }, annotations: outside.of(true) })
  }

  /** What is wrong, to be underlined where it stands. */
  set notices(notices: readonly Notice[]) {
    if (notices.length === this.#notices.length && notices.every((notice, i) => notice === this.#notices[i])) return
    this.#notices = notices
    this.#underline()
  }

  set label(label: string) {
    this.#label = label
    this.#view?.contentDOM.setAttribute("aria-label", label)
  }

  /** Puts the caret at a place, and offers what could stand there where asked to. */
  take(at: number, offer = false): void {
    this.#start = { at, offer }
    this.#takeUp()
  }

  /** The lines, from the top, to be measured. */
  get lines(): readonly Element[] {
    return [...(this.shadowRoot?.querySelectorAll(".cm-line") ?? [])]
  }

  connectedCallback(): void {
    const root = this.shadowRoot ?? this.attachShadow({ mode: "open" })
    if (this.#view === null) {
      const parent = document.createElement("div")
      root.replaceChildren(parent)
      const state = EditorState.create({ doc: this.#text, extensions: this.#extensions() })
      // A root of its own: in a document the editor would write its styles into a style element, which the policy forbids.
      this.#view = new EditorView({ root, parent, state })
      root.adoptedStyleSheets = [...root.adoptedStyleSheets, ...[ink, editorInk].flatMap(({ styleSheet }) => styleSheet ?? [])]
    }
    this.label = this.#label
    this.#underline()
    this.#takeUp()
  }

  disconnectedCallback(): void {
    this.#view?.destroy()
    this.#view = null
  }

  #takeUp(): void {
    const view = this.#view
    if (view === null || this.#start === null) return
    const { at, offer } = this.#start
    this.#start = null
    view.dispatch({ selection: EditorSelection.cursor(Math.min(at, view.state.doc.length)), scrollIntoView: true })
    view.focus()
    if (offer) startCompletion(view)
  }

  #underline(): void {
    const view = this.#view
    if (view === null) return
    view.dispatch(
      setDiagnostics(
        view.state,
        this.#notices.map((notice) => this.#diagnostic(notice, view.state.doc.toString())),
      ),
    )
  }

  #diagnostic(notice: Notice, text: string): Diagnostic {
    const { from, to } = textRange(readingOf(text).statement, notice.at)
    const { mend } = notice
    const severity = notice.level === "fault" ? "error" : notice.level === "warning" ? "warning" : "info"
    return {
      from,
      to: Math.min(Math.max(to, from), text.length),
      severity,
      message: notice.hint === null ? notice.text : `${notice.text} ${notice.hint}`,
      ...(mend === null ? {} : { actions: [{ name: mend.label, apply: () => this.#mend(mend) }] }),
    }
  }

  #mend(intent: Intent): void {
    this.dispatchEvent(new IntentEvent({ intent }))
  }

  #extensions() {
    return [
      EditorView.lineWrapping,
      EditorState.tabSize.of(2),
      colours,
      EditorView.editorAttributes.compute(["doc"], (state) => ({
        class: readingOf(state.doc.toString()).statement.kind === "note" ? "is-note" : "",
      })),
      autocompletion({
        override: [(context) => this.#complete(context)],
        defaultKeymap: false,
        icons: false,
        closeOnBlur: true,
        optionClass: (option) => `sort-${option.type ?? ""}`,
        activateOnCompletion: (option) => (option as Completion & { more?: boolean }).more === true,
      }),
      Prec.highest(
        keymap.of([{ key: "Enter", run: takeOrGoOn }, ...completionKeymap.filter(({ key }) => key !== "Escape" && key !== "Enter")]),
      ),
      keymap.of([
        { key: "Tab", run: acceptCompletion },
        { key: "Shift-Enter", run: insertNewline },
        { key: "ArrowUp", run: (view) => this.#leaveAt(view, "above") },
        { key: "ArrowDown", run: (view) => this.#leaveAt(view, "below") },
        { key: "Escape", run: (view) => this.#escape(view) },
        // The notebook has the only history: the page hears these keys too, and the browser's own undo is kept out.
        ...["Mod-z", "Mod-y", "Mod-Shift-z"].map((key) => ({ key, run: () => true })),
        ...lintKeymap.filter(({ key }) => key === "F8"),
        ...defaultKeymap.filter(({ key }) => key !== "Escape"),
      ]),
      EditorView.domEventHandlers({
        beforeinput: (event, view) => {
          // Where the browser itself writes over coloured text it keeps the colour in a style attribute, which the policy forbids.
          if (event.inputType === "insertText" && event.data !== null && !event.isComposing && !view.composing) {
            view.dispatch(view.state.replaceSelection(event.data), { scrollIntoView: true, userEvent: "input.type" })
            event.preventDefault()
            return true
          }
          if (event.inputType !== "historyUndo" && event.inputType !== "historyRedo") return false
          event.preventDefault()
          return true
        },
      }),
      EditorView.contentAttributes.of({ spellcheck: "false", autocapitalize: "off", autocorrect: "off" }),
      EditorView.updateListener.of((update) => {
        if (!update.docChanged) return
        this.#text = update.state.doc.toString()
        if (!update.transactions.some((each) => each.annotation(outside) === true)) this.dispatchEvent(new TextEvent(this.#text))
      }),
    ]
  }

  /** Puts the list of completions away where one is open, else leaves. */
  #escape(view: EditorView): boolean {
    if (completionStatus(view.state) === "active") return closeCompletion(view)
    closeCompletion(view)
    return this.dispatchEvent(new LeaveEvent("stay"))
  }

  /** Out of the first line upwards, and out of the last downwards, the arrow goes on to the neighbour. */
  #leaveAt(view: EditorView, to: "above" | "below"): boolean {
    const { main } = view.state.selection
    if (completionStatus(view.state) === "active" || !main.empty) return false
    const there = view.moveVertically(main, to === "below")
    const stays = to === "above" ? main.head === 0 : main.head === view.state.doc.length
    if (!stays || there.head !== main.head) return false
    return this.dispatchEvent(new LeaveEvent(to))
  }

  #complete(context: CompletionContext): CompletionResult | null {
    const around = this.surroundings()
    if (around === null) return null
    const typed = context.matchBefore(/[\p{L}_][\p{L}\p{M}\p{Nd}_]*|[( ]/u)
    if (!context.explicit && typed === null) return null
    const found = completion(context.state.doc.toString(), context.pos, around)
    if (found === null) return null
    return {
      from: found.from,
      validFor: /^[\p{L}_"][\p{L}\p{M}\p{Nd}_]*$/u,
      options: found.options.map((option, i) => ({
        label: option.label,
        detail: option.says,
        type: option.sort,
        boost: -i / 100,
        ...(option.more === true ? { more: true } : {}),
        ...(option.apply === undefined ? {} : { apply: option.apply }),
      })),
    }
  }
}

/** Takes what completion offers; but where the word stands there whole already, Enter means the next line. */
function takeOrGoOn(view: EditorView): boolean {
  const { state } = view
  if (completionStatus(state) === "active") {
    const { from } = state.selection.main
    const typed = /[\p{L}_"][\p{L}\p{M}\p{Nd}_"]*$/u.exec(state.doc.lineAt(from).text.slice(0, from - state.doc.lineAt(from).from))?.[0]
    const offered = selectedCompletion(state)
    if (offered !== null && offered.label !== typed) return acceptCompletion(view) || newClause(view)
    closeCompletion(view)
  }
  return newClause(view)
}

/** A line feed, and under the heading the two blanks by which a clause stands in. */
function newClause(view: EditorView): boolean {
  const { state } = view
  const { statement } = readingOf(state.doc.toString())
  const { from } = state.selection.main
  const inNote = statement.kind === "note"
  const line = state.doc.lineAt(from)
  const indent = inNote || statement.kind === null ? "" : /^\s+/.exec(line.text)?.[0] || "  "
  view.dispatch(state.replaceSelection(`\n${indent}`), { scrollIntoView: true, userEvent: "input" })
  return true
}

/** The marks of a text as decorations. Reading takes some 50 µs, so the whole cell is read again at each change. */
const colours = StateField.define<DecorationSet>({
  create: (state) => decorations(state.doc.toString()),
  update: (now, change) => (change.docChanged ? decorations(change.newDoc.toString()) : now),
  provide: (field) => EditorView.decorations.from(field),
})

function decorations(text: string): DecorationSet {
  const ranges: Range<Decoration>[] = []
  for (const { from, to, kind } of marks(readingOf(text))) if (to > from) ranges.push(decoration(kind).range(from, to))
  return Decoration.set(ranges)
}

const made = new Map<string, Decoration>()

function decoration(kind: string): Decoration {
  const found = made.get(kind) ?? Decoration.mark({ class: `m-${kind}` })
  made.set(kind, found)
  return found
}

/** The least change that makes one text of another: what they share at both ends is left alone. */
function difference(now: string, next: string): { readonly from: number; readonly to: number; readonly insert: string } {
  const most = Math.min(now.length, next.length)
  let head = 0
  while (head < most && now[head] === next[head]) head++
  let tail = 0
  while (tail < most - head && now[now.length - 1 - tail] === next[next.length - 1 - tail]) tail++
  return { from: head, to: now.length - tail, insert: next.slice(head, next.length - tail) }
}

customElements.define("etamu-editor", StatementEditor)

declare global {
  interface HTMLElementTagNameMap {
    "etamu-editor": StatementEditor
  }
}
