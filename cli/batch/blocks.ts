import type { Item } from './item.ts'

/** Some of the input in its order: what is sent together and printed together. */
export type Block = {
  items: Item[]
  rows: (Item & { send: NonNullable<Item['send']> })[]
  /** Units, channels and ranges in it. */
  places: Set<string>
}

const rowsMax = 500
const itemsMax = 2_000
const charactersMax = 2 * 1024 * 1024
/** When the input pauses this long, what has come is sent: a tester at the other end of a pipe waits for its codes. */
const pauseMs = 200

/** Cuts items into blocks. When the input fails, what came before is given first. */
export async function* blocksOf(input: AsyncIterable<Item[]>): AsyncGenerator<Block> {
  const items = input[Symbol.asyncIterator]()
  let builder = new Builder()
  let next = items.next()
  try {
    for (;;) {
      const came = await (builder.isEmpty ? next : orPause(next))
      if (came === 'pause') {
        yield builder.block
        builder = new Builder()
        continue
      }
      if (came.done) break
      next = items.next()
      // It is awaited in a moment; a failure in between has to wait for that and not end the process.
      next.catch(() => undefined)
      for (const item of came.value) {
        builder.add(item)
        if (!builder.isFull) continue
        yield builder.block
        builder = new Builder()
      }
    }
  } catch (error) {
    if (!builder.isEmpty) yield builder.block
    throw error
  }
  if (!builder.isEmpty) yield builder.block
}

async function orPause<T>(next: Promise<T>): Promise<T | 'pause'> {
  let timer: NodeJS.Timeout | undefined
  const pause = new Promise<'pause'>((resolve) => {
    timer = setTimeout(() => resolve('pause'), pauseMs)
  })
  try {
    return await Promise.race([next, pause])
  } finally {
    clearTimeout(timer)
  }
}

class Builder {
  readonly block: Block = { items: [], rows: [], places: new Set() }
  private characters = 0

  get isEmpty(): boolean {
    return this.block.items.length === 0
  }

  get isFull(): boolean {
    const { rows, items } = this.block
    return rows.length >= rowsMax || items.length >= itemsMax || this.characters > charactersMax
  }

  add(item: Item): void {
    this.block.items.push(item)
    if (item.send === null) return
    const { body, text } = item.send
    this.block.rows.push(item as Block['rows'][number])
    this.block.places.add(JSON.stringify([body.design, body.unit, body.channel, body.range]))
    this.characters += text.length
  }
}
