// Every notice the shelf can give: what a browser may refuse, said so that a person knows what to do about it.

import { heading, type Notice } from "../../runtime/notice.ts"

const fault = (code: string, text: string, hint: string): Notice => ({
  level: "fault",
  code: `shelf/${code}`,
  text,
  hint,
  clause: null,
  at: heading,
  mend: null,
})

export const absent = (): Notice =>
  fault(
    "absent",
    "This browser keeps nothing here, as in a private window, so the shelf is not at hand.",
    "Save the notebook as a file before the window is closed.",
  )

export const blocked = (): Notice =>
  fault(
    "blocked",
    "Another tab holds an older form of the shelf open, so it cannot be opened here.",
    "Close the other tabs of Etamu, then load this page again.",
  )

export const newer = (): Notice =>
  fault("newer", "A newer Etamu has used this shelf, and this one cannot read it.", "Load the page again to get the newer one.")

export const closed = (): Notice =>
  fault(
    "closed",
    "The shelf was closed by the browser or by a newer Etamu in another tab, so nothing more is saved here.",
    "Save the notebook as a file, then load the page again.",
  )

export const full = (): Notice =>
  fault(
    "full",
    "The browser has no room left for the shelf, so the last change is not saved.",
    "Take notebooks off the shelf, or save this one as a file.",
  )

export const refused = (because: string): Notice =>
  fault(
    "refused",
    `The browser did not do what the shelf asked of it: ${because.replace(/\.$/, "")}.`,
    "Save the notebook as a file to be safe.",
  )

export const differs = (): Notice =>
  fault(
    "differs",
    "What the shelf gave back is not what was saved.",
    "Save the notebook as a file, and do not rely on this browser's storage.",
  )

export const overtaken = (): Notice =>
  fault(
    "overtaken",
    "Another tab saved this notebook in the meantime, so this change is not saved.",
    "Save this one as a file, or load the page again to see the other.",
  )

export const onlyReading = (): Notice =>
  fault(
    "only-reading",
    "This notebook is open in another tab, which writes it; here it can be read.",
    "Close it in the other tab to write here.",
  )

export const gone = (): Notice =>
  fault("gone", "This notebook is no longer on the shelf.", "Save it as a file, or put it on the shelf again.")

export const alreadyThere = (title: string): Notice =>
  fault("already-there", `The notebook ${title} is on the shelf already.`, "Open it there, or put this one on the shelf as a copy.")

export const openElsewhere = (title: string): Notice =>
  fault("open-elsewhere", `The notebook ${title} is open in another tab, so it stays on the shelf.`, "Close it there first.")

/** What an exception of the browser's storage means to a person. */
export function noticeOf(error: unknown): Notice {
  const name = error instanceof Error || error instanceof DOMException ? error.name : ""
  if (name === "QuotaExceededError") return full()
  if (name === "VersionError") return newer()
  if (name === "InvalidStateError" || name === "AbortError") return closed()
  return refused(error instanceof Error && error.message !== "" ? error.message : String(error))
}
