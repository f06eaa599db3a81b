export type RecipeValue = null | boolean | number | string | Float64Array | readonly RecipeValue[] | { readonly [member: string]: RecipeValue }
