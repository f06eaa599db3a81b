// Plots as data: panels, axes and marks in the units of the data. A renderer in ui/drawing turns any figure into a scene; nothing here
// knows of pixels, colours or a page.

export type Axis = {
  readonly label: string
  readonly unit: string | null
  readonly from: number
  readonly to: number
  readonly levels: readonly string[] | null
}

export type Mark =
  | {
      readonly type: "points"
      readonly series: string
      readonly x: Float64Array
      readonly y: Float64Array
      readonly size: Float64Array | null
      readonly rows: Uint32Array | null
    }
  | { readonly type: "line"; readonly series: string; readonly x: Float64Array; readonly y: Float64Array }
  | { readonly type: "band"; readonly series: string; readonly x: Float64Array; readonly low: Float64Array; readonly high: Float64Array }
  | { readonly type: "bars"; readonly series: string; readonly edges: Float64Array; readonly counts: Float64Array }

export type Panel = { readonly title: string | null; readonly x: Axis; readonly y: Axis; readonly marks: readonly Mark[] }

export type Figure = { readonly panels: readonly Panel[] }
