// A page that shows every block with sample data, for looking at and for tests. Not part of what is shipped.

import { html, render } from "lit"
import "../../../ui/page/blocks/block.ts"
import { gallery } from "./samples.ts"

const main = document.createElement("main")
document.body.append(main)
render(
  gallery.map(([title, block]) => html`<section><h2>${title}</h2><etamu-block .block=${block} .cell=${"c"}></etamu-block></section>`),
  main,
)
