// Style sheets that a browser test loads for their effect.

declare module "*.css"
