import type { Block } from './blocks.ts'

type Work = {
  /** Blocks under way at a time. */
  width: number
  send: (block: Block) => Promise<void>
  /** Called in the order of the input. False: nobody reads any more, so stop. */
  print: (block: Block) => Promise<boolean>
}

type Running = { places: ReadonlySet<string>; settled: Promise<void> }

/**
 * Sends blocks several at a time and prints them in the order of the input. Two more than are under way are in memory at
 * most, so a slow reader or a slow block slows the input down. Two blocks that share a unit go one after the other.
 * @returns false when it was left off because nobody reads any more
 * @throws the first trouble of sending, else that of the input; everything that had begun has then ended and was printed
 */
export async function runBlocks(
  blocks: AsyncIterable<Block>,
  { width, send, print }: Work,
): Promise<boolean> {
  const gate = new Gate(width)
  const underWay = new Set<Running>()
  const troubles: unknown[] = []
  let unprinted = 0
  let readerGone = false
  let leftOff = false
  let printed: Promise<void> = Promise.resolve()
  let madeRoom = () => {}

  const sendInTurn = async (block: Block, before: readonly Running[]) => {
    await Promise.all(before.map(({ settled }) => settled))
    await gate.enter()
    try {
      if (readerGone) leftOff = true
      else if (troubles.length === 0) await send(block)
    } catch (error) {
      troubles.push(error)
    } finally {
      gate.leave()
      // What was sent is let go at once; what came back waits for its turn to be printed.
      for (const row of block.items) row.send = null
      block.rows = []
    }
  }
  const start = (block: Block) => {
    const { places } = block
    const before = [...underWay].filter((running) => overlap(running.places, places))
    const running: Running = { places, settled: sendInTurn(block, before) }
    underWay.add(running)
    unprinted += 1
    printed = printed.then(async () => {
      await running.settled
      underWay.delete(running)
      readerGone = !(await print(block))
      unprinted -= 1
      madeRoom()
    })
    // Whoever awaits it hears of it; until then a failing output must not end the process.
    printed.catch(() => madeRoom())
  }
  let inputTrouble: { error: unknown } | null = null
  try {
    for await (const block of blocks) {
      leftOff ||= readerGone
      if (troubles.length > 0 || leftOff) break
      start(block)
      if (unprinted < width + 2) continue
      await Promise.race([
        printed,
        new Promise<void>((resolve) => {
          madeRoom = resolve
        }),
      ])
    }
  } catch (error) {
    inputTrouble = { error }
  }
  await printed
  if (troubles.length > 0) throw troubles[0]
  if (inputTrouble) throw inputTrouble.error
  return !leftOff
}

function overlap(a: ReadonlySet<string>, b: ReadonlySet<string>): boolean {
  for (const place of a) if (b.has(place)) return true
  return false
}

class Gate {
  private free: number
  private readonly waiting: (() => void)[] = []

  constructor(width: number) {
    this.free = width
  }

  async enter(): Promise<void> {
    if (this.free > 0) this.free -= 1
    else await new Promise<void>((resolve) => this.waiting.push(resolve))
  }

  leave(): void {
    const next = this.waiting.shift()
    if (next) next()
    else this.free += 1
  }
}
