// Light or dark: the system's, unless a person chose. The choice is the browser's, not the notebook's.

export type Look = "system" | "light" | "dark"

const place = "etamu.look"

/** What was chosen before; the system's where nothing was, or where the browser keeps nothing. */
export function chosenLook(): Look {
  try {
    const kept = localStorage.getItem(place)
    return kept === "light" || kept === "dark" ? kept : "system"
  } catch {
    return "system"
  }
}

/** Shows the page so, and keeps the choice where the browser lets it. */
export function chooseLook(look: Look): void {
  if (look === "system") delete document.documentElement.dataset["look"]
  else document.documentElement.dataset["look"] = look
  try {
    localStorage.setItem(place, look)
  } catch {
    // A private window: the choice holds until the page is closed.
  }
}
