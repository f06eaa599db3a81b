// What browser.mjs gives, for those who read types.

export function foundBrowser(): string | null
export function browserPath(): string
export const browserArguments: string[]
