/**
 * What shares a transaction: so many requests, of so many points and readings in all. A long sweep weighs as much as hundreds
 * of short measurements, and a statement may have 16 MiB. One request always goes, whatever it weighs.
 */
export const share = { requests: 128, weight: 8_192 } as const
/** Transactions that are under way at once in this process. */
const underWayMax = 3
/**
 * One at a time makes the fullest transactions. Another starts when it is at least half full, so that one computes while
 * others wait for the database; and when one takes longer than this, waiting for a lock, so that it holds up nobody.
 */
const slowMs = 40

type Waiting<In, Out> = { input: In; resolve: (out: Out) => void; reject: (error: unknown) => void }

/**
 * Lets requests that arrive at the same moment, or while others are worked on, share a transaction. Nobody waits
 * artificially: the first goes with those that were read from their sockets in the same turn of the event loop.
 */
export function coalesce<In, Out>(
  work: (inputs: readonly In[]) => Promise<Out[]>,
  weightOf: (input: In) => number,
): (input: In) => Promise<Out> {
  const queue: Waiting<In, Out>[] = []
  let underWay = 0
  let pumping = false
  let waitingForSlow = false

  const start = (isWorthwhile: (next: Share) => boolean) => {
    while (queue.length > 0 && underWay < underWayMax) {
      const next = nextShare(queue, weightOf)
      if (underWay > 0 && !isWorthwhile(next)) return
      underWay++
      void run(queue.splice(0, next.count))
    }
  }
  const pump = () => {
    start(({ count, isCut }) => isCut || count >= share.requests / 2)
    if (queue.length === 0 || waitingForSlow) return
    waitingForSlow = true
    setTimeout(() => {
      waitingForSlow = false
      start(() => true)
    }, slowMs)
  }
  const pumpSoon = () => {
    if (pumping) return
    pumping = true
    setImmediate(() => {
      pumping = false
      pump()
    })
  }
  const run = async (batch: Waiting<In, Out>[]) => {
    try {
      const outs = await work(batch.map((one) => one.input))
      batch.forEach((one, i) => {
        one.resolve(outs[i]!)
      })
    } catch (error) {
      for (const one of batch) one.reject(error)
    } finally {
      underWay--
      pumpSoon()
    }
  }
  return (input) =>
    new Promise((resolve, reject) => {
      queue.push({ input, resolve, reject })
      pumpSoon()
    })
}

/** How many of those in front go together, and whether one was left that would have been too many. */
type Share = { count: number; isCut: boolean }

function nextShare<In>(queue: readonly { input: In }[], weightOf: (input: In) => number): Share {
  let weight = 0
  for (const [count, { input }] of queue.entries()) {
    weight += weightOf(input)
    if (count === share.requests || (count > 0 && weight > share.weight)) return { count, isCut: true }
  }
  return { count: queue.length, isCut: false }
}
