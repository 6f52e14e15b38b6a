import { setTimeout as wait } from 'node:timers/promises'
import { describe, expect, it } from 'vitest'
import { coalesce, share } from '../../server/commands/coalesce.ts'

const light = () => 1

describe('coalescing', () => {
  it('lets those go together that arrive together, and what queues behind them', async () => {
    const { batches, record } = recorder(light)
    const first = [record(0), record(1)]
    await wait(1)
    const outs = await Promise.all([...first, ...Array.from({ length: 140 }, (_, i) => record(i + 2))])
    expect(outs).toEqual(Array.from({ length: 142 }, (_, i) => i * 10))
    expect(batches.map((batch) => batch.length)).toEqual([2, share.requests, 12])
  })

  it('lets no more go together than their weight allows, and one of any weight', async () => {
    const weights = [share.weight, share.weight / 2, share.weight / 2, 1, share.weight + 1, 1]
    const { batches, record } = recorder((i) => weights[i]!)
    await Promise.all(weights.map((_, i) => record(i)))
    expect(batches).toEqual([[0], [1, 2], [3], [4], [5]])
  })

  it('starts others beside one that takes long, and never a fourth', async () => {
    let underWay = 0
    let most = 0
    const record = coalesce(async (inputs: readonly number[]) => {
      most = Math.max(most, ++underWay)
      await wait(150)
      underWay--
      return [...inputs]
    }, light)
    await Promise.all(Array.from({ length: 600 }, (_, i) => record(i)))
    expect(most).toBe(3)
  })

  it('passes trouble of the whole to each, and goes on', async () => {
    let fail = true
    const record = coalesce(async (inputs: readonly number[]) => {
      if (fail) throw new Error('gone')
      return [...inputs]
    }, light)
    await expect(Promise.all([record(1), record(2), record(3)])).rejects.toThrow('gone')
    await wait(1)
    fail = false
    expect(await record(4)).toBe(4)
  })
})

function recorder(weightOf: (input: number) => number) {
  const batches: number[][] = []
  const record = coalesce(async (inputs: readonly number[]) => {
    batches.push([...inputs])
    await wait(20)
    return inputs.map((n) => n * 10)
  }, weightOf)
  return { batches, record }
}
