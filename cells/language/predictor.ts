// Predictor notation (Wilkinson & Rogers 1973): text to a list of terms. `.` binds tightest, then `/`, then `*`, then `+` and `-` from
// left to right. The constant is the term `intercept`. What the calls compute is the design matrix's business, not this file's.

import type { Place } from "../../runtime/notice.ts"
import type { Name } from "../../runtime/value.ts"

export type PieceCall = "itself" | "log" | "square_root" | "power" | "polynomial" | "natural_spline" | "periodic" | "category"

/** One variable of a term, as itself or through a call; `setting` is the power, degree, number of knots or period. */
export type PredictorPiece = { readonly variable: Name; readonly as: PieceCall; readonly setting: number | null; readonly at: Place }

/** A product of pieces, in the order written; `says` is its canonical text, such as `night.lot` or `polynomial(night, degree 2)`. */
export type PredictorTerm = { readonly pieces: readonly PredictorPiece[]; readonly says: string }

/** Terms expanded, each once, in order of degree within the order written (main effects before their interactions). */
export type Terms = { readonly intercept: boolean; readonly terms: readonly PredictorTerm[] }
