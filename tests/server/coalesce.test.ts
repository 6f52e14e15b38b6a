import { setTimeout as wait } from 'node:timers/promises'
import { describe, expect, it } from 'vitest'
import { coalesce } from '../../server/commands/coalesce.ts'

describe('coalescing', () => {
  it('lets the first go alone and at once, and what queued behind it together', async () => {
    const batches: number[][] = []
    const record = coalesce(async (inputs: readonly number[]) => {
      batches.push([...inputs])
      await wait(20)
      return inputs.map((n) => n * 10)
    })
    const outs = await Promise.all(Array.from({ length: 80 }, (_, i) => record(i)))
    expect(outs).toEqual(Array.from({ length: 80 }, (_, i) => i * 10))
    expect(batches.map((batch) => batch.length)).toEqual([1, 64, 15])
  })

  it('starts a second transaction beside one that takes long, and never a third', async () => {
    let underWay = 0
    let most = 0
    const record = coalesce(async (inputs: readonly number[]) => {
      most = Math.max(most, ++underWay)
      await wait(150)
      underWay--
      return [...inputs]
    })
    await Promise.all(Array.from({ length: 300 }, (_, i) => record(i)))
    expect(most).toBe(2)
  })

  it('passes trouble of the whole to each, and goes on', async () => {
    let fail = true
    const record = coalesce(async (inputs: readonly number[]) => {
      if (fail) throw new Error('gone')
      return [...inputs]
    })
    await expect(Promise.all([record(1), record(2), record(3)])).rejects.toThrow('gone')
    await wait(1)
    fail = false
    expect(await record(4)).toBe(4)
  })
})
