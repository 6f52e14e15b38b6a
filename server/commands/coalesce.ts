/** How many requests share a transaction, and how many transactions are under way at once in this process. */
const shareMax = 64
const underWayMax = 2
/**
 * One at a time makes the fullest transactions. A second one starts when it is full already, so that one computes while the
 * other waits for the disk; and when one takes longer than this, waiting for a lock, so that it holds up nobody.
 */
const slowMs = 40

type Waiting<In, Out> = { input: In; resolve: (out: Out) => void; reject: (error: unknown) => void }

/**
 * Lets requests that arrive while others are worked on share the next transaction. Nobody waits artificially: the first
 * goes at once and alone, and what queued behind it goes together.
 */
export function coalesce<In, Out>(
  work: (inputs: readonly In[]) => Promise<Out[]>,
): (input: In) => Promise<Out> {
  const queue: Waiting<In, Out>[] = []
  let underWay = 0
  let waitingForSlow = false

  const start = () => {
    if (queue.length === 0 || underWay >= underWayMax) return
    underWay++
    void run(queue.splice(0, shareMax))
  }
  const pump = () => {
    if (underWay === 0 || queue.length >= shareMax) start()
    if (queue.length === 0 || waitingForSlow) return
    waitingForSlow = true
    setTimeout(() => {
      waitingForSlow = false
      start()
    }, slowMs)
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
      pump()
    }
  }
  return (input) =>
    new Promise((resolve, reject) => {
      queue.push({ input, resolve, reject })
      pump()
    })
}
