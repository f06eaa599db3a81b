// The functions of expressions: their names, what they take, and a line of help. Plain data that the page loads too, for completion and
// for faults; what they compute is in evaluate.ts.

export interface FunctionWords {
  /** Fewest and most arguments. */
  readonly least: number
  readonly most: number
  /** How it is written. */
  readonly form: string
  readonly says: string
}

const one = (name: string, says: string, argument = "x"): readonly [string, FunctionWords] => [
  name,
  { least: 1, most: 1, form: `${name}(${argument})`, says },
]

/** What every expression may call. */
export const functions: ReadonlyMap<string, FunctionWords> = new Map([
  one("abs", "the number without its sign"),
  one("asin", "the angle whose sine it is"),
  one("atan", "the angle whose tangent it is"),
  one("ceil", "the least whole number not below it"),
  one("cos", "cosine of an angle in radians"),
  one("exp", "e to the power of it"),
  one("expm1", "exp(x) − 1, to full precision near 0"),
  one("floor", "the greatest whole number not above it"),
  one("log", "natural logarithm"),
  one("log10", "logarithm to base 10"),
  one("log1p", "log(1 + x), to full precision near 0"),
  ["max", { least: 1, most: 100, form: "max(x, y, …)", says: "the greatest of several, row by row" }],
  ["min", { least: 1, most: 100, form: "min(x, y, …)", says: "the least of several, row by row" }],
  ["mod", { least: 2, most: 2, form: "mod(x, m)", says: "what is left of x after whole multiples of m" }],
  one("round", "the nearest whole number, halves away from 0"),
  one("sign", "−1, 0 or 1"),
  one("sin", "sine of an angle in radians"),
  one("square_root", "square root"),
  one("tan", "tangent of an angle in radians"),
  one("tanh", "hyperbolic tangent"),
  one("normal_cdf", "the share of a standard normal law below it"),
  one("normal_quantile", "the point below which a standard normal law has this share"),
  one("logit", "log(p/(1 − p))"),
  one("inverse_logit", "1/(1 + exp(−x))"),
  ["band", { least: 2, most: 100, form: "band(x, 25, 40)", says: "a category by cut points: below 25, 25 to 40, 40 and above" }],
  ["if", { least: 3, most: 3, form: "if(condition, a, b)", says: "a where the condition is true, else b" }],
  one("known", "true where it is not missing"),
  one("year", "the year of a date", "d"),
  one("month", "the month of a date, 1 to 12", "d"),
  one("mean", "mean of a column"),
  one("median", "median of a column"),
  one("sd", "standard deviation of a column, by n − 1"),
  one("sum", "sum of a column"),
  one("count", "how many values of a column are not missing"),
  one("smallest", "least value of a column"),
  one("largest", "greatest value of a column"),
  ["quantile", { least: 2, most: 2, form: "quantile(x, p)", says: "the point below which a share p of a column lies" }],
])

/** What a `value` may call beside: numbers of a model. */
export const modelFunctions: ReadonlyMap<string, FunctionWords> = new Map([
  ["coefficient", { least: 2, most: 2, form: 'coefficient(M, "term")', says: "a coefficient of a model, by its term" }],
  ["mean_at", { least: 1, most: 200, form: "mean_at(M, C = v, …)", says: "the fitted mean where the columns are held at these values" }],
  ["deviance", { least: 1, most: 1, form: "deviance(M)", says: "the deviance of a model" }],
  ["aic", { least: 1, most: 1, form: "aic(M)", says: "the AIC of a model" }],
])
