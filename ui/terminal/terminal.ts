// What the command needs of the terminal it runs in, handed in by the entry.

export interface Terminal {
  /** Where the names of files are looked up. */
  readonly folder: string
  /** Signs on a line. */
  readonly width: number
  /** What was asked for. */
  print(text: string): void
  /** What is wrong, beside it. */
  complain(text: string): void
  /** RFC 3339, UTC. */
  now(): string
  /** A new UUID. */
  newId(): string
}
