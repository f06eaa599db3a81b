// The keys of the page, as data: the sheet that shows them, the menus that name them and the one listener that acts on them all read from
// here. Letters are told by where they lie, so that a layout on which Alt writes another letter works the same.

export type Command = "add" | "up" | "down" | "off" | "remove" | "undo" | "redo" | "shelf" | "file" | "open" | "keys"

interface Shortcut {
  readonly command: Command
  /** KeyboardEvent.code. */
  readonly code: string
  readonly alt: boolean
  /** Ctrl, or ⌘ where there is one. */
  readonly main: boolean
  readonly shift: boolean
  readonly says: string
}

const isApple = /Mac|iPhone|iPad/.test(globalThis.navigator?.platform ?? "")

const alt = (command: Command, code: string, says: string): Shortcut => ({ command, code, alt: true, main: false, shift: false, says })
const main = (command: Command, code: string, says: string, shift = false): Shortcut => ({
  command,
  code,
  alt: false,
  main: true,
  shift,
  says,
})

export const shortcuts: readonly Shortcut[] = [
  alt("add", "KeyN", "Add a cell below the one in focus"),
  alt("up", "PageUp", "Move the cell up"),
  alt("down", "PageDown", "Move the cell down"),
  alt("off", "KeyO", "Switch the cell off, or on again"),
  alt("remove", "Backspace", "Take the cell away"),
  main("undo", "KeyZ", "Undo"),
  main("redo", "KeyZ", "Redo", true),
  main("redo", "KeyY", "Redo"),
  alt("shelf", "KeyS", "Show the shelf"),
  main("open", "KeyO", "Open a file"),
  main("file", "KeyS", "Hand over: save as a file"),
  alt("keys", "KeyK", "Show these keys"),
]

/** Keys that the page does not listen for itself: those of a row, of the editor and of the figures. */
export const otherKeys: readonly { readonly keys: string; readonly says: string }[] = [
  { keys: "Tab", says: "Go on to the next statement, finding or button" },
  { keys: "↑ ↓", says: "On a statement: to the one above or below" },
  { keys: "Enter", says: "On a statement: go into it" },
  { keys: "Escape", says: "In a statement: leave it" },
  { keys: "Ctrl Space", says: "In a statement: what could stand here" },
  { keys: "F8", says: "In a statement: to the next thing that is wrong" },
  { keys: "← →", says: "On the link strip and on a dial: walk along" },
]

/** The command of a key, null where it has none. */
export function commandOf(event: KeyboardEvent): Command | null {
  const isMain = isApple ? event.metaKey : event.ctrlKey
  const found = shortcuts.find(
    (each) => each.code === event.code && each.alt === event.altKey && each.main === isMain && each.shift === event.shiftKey,
  )
  return found?.command ?? null
}

/** The keys of a command, as written on the page. */
export function keyOf(command: Command): string {
  const found = shortcuts.find((each) => each.command === command)
  return found === undefined ? "" : written(found)
}

/** One shortcut as written on the page. */
export function written({ alt: withAlt, main: withMain, shift, code }: Shortcut): string {
  const key = { PageUp: "Page Up", PageDown: "Page Down", Backspace: "Backspace" }[code] ?? code.replace(/^Key/, "")
  return [
    ...(withMain ? [isApple ? "⌘" : "Ctrl"] : []),
    ...(withAlt ? [isApple ? "⌥" : "Alt"] : []),
    ...(shift ? ["Shift"] : []),
    key,
  ].join(" ")
}
