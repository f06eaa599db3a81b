// A queue by order of urgency: a binary heap over what is to be done next, with its order told from outside.

export interface Queue<Item> {
  add(item: Item): void
  take(): Item | undefined
  peek(): Item | undefined
  /** The order has changed: everything is put in its place again. */
  reorder(): void
}

export function createQueue<Item>(before: (a: Item, b: Item) => boolean): Queue<Item> {
  let heap: Item[] = []

  const rise = (item: Item): void => {
    let at = heap.length
    heap.push(item)
    while (at > 0) {
      const above = (at - 1) >> 1
      const other = heap[above] as Item
      if (!before(item, other)) break
      heap[at] = other
      at = above
    }
    heap[at] = item
  }

  const sink = (item: Item): void => {
    let at = 0
    for (let below = 1; below < heap.length; below = 2 * at + 1) {
      const right = below + 1
      if (right < heap.length && before(heap[right] as Item, heap[below] as Item)) below = right
      const other = heap[below] as Item
      if (!before(other, item)) break
      heap[at] = other
      at = below
    }
    heap[at] = item
  }

  return {
    add: rise,
    peek: () => heap[0],
    take: () => {
      const first = heap[0]
      const last = heap.pop()
      if (last !== undefined && heap.length > 0) sink(last)
      return first
    },
    reorder: () => {
      const items = heap
      heap = []
      for (const item of items) rise(item)
    },
  }
}
