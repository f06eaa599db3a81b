// Quiets the one notice lit's development build prints on loading; its other warnings stay, since they find mistakes.

const seen = globalThis as { litIssuedWarnings?: Set<string> }
seen.litIssuedWarnings ??= new Set()
seen.litIssuedWarnings.add("dev-mode")
