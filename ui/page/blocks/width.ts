// The width an element has to draw in: measured when it is first shown and whenever it changes, so that scenes are made at the size they
// are seen and their text is never stretched.

import type { ReactiveController, ReactiveControllerHost } from "lit"

export class WidthController implements ReactiveController {
  /** In whole pixels; 0 until the element is on the page. */
  width = 0
  readonly #host: ReactiveControllerHost & HTMLElement
  readonly #observer = new ResizeObserver((entries) => {
    for (const entry of entries) this.#take(entry.contentRect.width)
  })

  constructor(host: ReactiveControllerHost & HTMLElement) {
    this.#host = host
    host.addController(this)
  }

  hostConnected(): void {
    this.#observer.observe(this.#host)
    this.width = Math.floor(this.#host.clientWidth)
  }

  hostDisconnected(): void {
    this.#observer.disconnect()
  }

  #take(width: number): void {
    const whole = Math.floor(width)
    if (whole === this.width) return
    this.width = whole
    this.#host.requestUpdate()
  }
}
