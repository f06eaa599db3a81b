// The media type of an enclosure, told from the end of its name. It is written to the file for others to read; how a file is read is
// decided by the data cell, never by this.

const types: Readonly<Record<string, string>> = {
  csv: "text/csv",
  tsv: "text/tab-separated-values",
  txt: "text/plain",
  json: "application/json",
  parquet: "application/vnd.apache.parquet",
}

/** The media type that goes with a file's name. */
export function mediaOf(name: string): string {
  const ending = /\.([A-Za-z0-9]+)$/.exec(name)?.[1]?.toLowerCase() ?? ""
  return Object.hasOwn(types, ending) ? (types[ending] ?? unknownType) : unknownType
}

const unknownType = "application/octet-stream"

/** The media type of a notebook file. */
export const notebookMedia = "application/vnd.etamu+jsonl"
