import { setTimeout as sleep } from 'node:timers/promises'
import { describe, expect, test } from 'vitest'
import type { Block } from '../../cli/batch/blocks.ts'
import { runBlocks } from '../../cli/batch/run-blocks.ts'
import { runSeed, seededRandom } from '../support/random.ts'

/** A block that holds these places; it is known by its first line. */
const block = (line: number, ...places: string[]): Block => ({
  items: [{ line, unit: null, channel: null, range: null, send: null, outcome: null }],
  rows: [],
  places: new Set(places),
})
const lineOf = ({ items }: Block) => items[0]?.line ?? 0

async function* inOrder(blocks: readonly Block[], came?: (line: number) => void) {
  for (const one of blocks) {
    came?.(lineOf(one))
    yield one
  }
}

describe('blocks of a batch', () => {
  const seed = runSeed()
  test(`are printed in order, at most 3 under way and five in memory (seed ${seed})`, async () => {
    const random = seededRandom(seed)
    let underWay = 0
    let most = 0
    let taken = 0
    let mostHeld = 0
    const printed: number[] = []
    const blocks = Array.from({ length: 60 }, (_, i) => block(i, `unit ${i}`))
    const whole = await runBlocks(
      inOrder(blocks, () => {
        taken += 1
        mostHeld = Math.max(mostHeld, taken - printed.length)
      }),
      {
        width: 3,
        send: async () => {
          most = Math.max(most, ++underWay)
          await sleep(random.below(8))
          underWay -= 1
        },
        print: async (one) => {
          printed.push(lineOf(one))
          await sleep(random.below(3))
          return true
        },
      },
    )
    expect(whole).toBe(true)
    expect(printed).toEqual(blocks.map(lineOf))
    expect(most).toBe(3)
    // One more has been asked for while five are held.
    expect(mostHeld).toBeLessThanOrEqual(6)
  })

  test('that share a unit go one after the other, others beside them', async () => {
    const events: string[] = []
    const blocks = [block(0, 'A'), block(1, 'B'), block(2, 'A', 'C'), block(3, 'C')]
    await runBlocks(inOrder(blocks), {
      width: 4,
      send: async (one) => {
        events.push(`begin ${lineOf(one)}`)
        await sleep(lineOf(one) === 0 ? 60 : 20)
        events.push(`end ${lineOf(one)}`)
      },
      print: async () => true,
    })
    const at = (event: string) => events.indexOf(event)
    expect(at('begin 2')).toBeGreaterThan(at('end 0'))
    expect(at('begin 3')).toBeGreaterThan(at('end 2'))
    expect(at('begin 1')).toBeLessThan(at('end 0'))
  })

  test('after trouble: what had begun ends and is printed, nothing else begins', async () => {
    const sent: number[] = []
    const printed: number[] = []
    const running = runBlocks(inOrder(Array.from({ length: 40 }, (_, i) => block(i, `${i}`))), {
      width: 2,
      send: async (one) => {
        sent.push(lineOf(one))
        await sleep(5)
        if (lineOf(one) === 7) throw new Error('gone')
      },
      print: async (one) => {
        printed.push(lineOf(one))
        return true
      },
    })
    await expect(running).rejects.toThrow('gone')
    expect(Math.max(...sent)).toBeLessThanOrEqual(8)
    expect(printed).toEqual(expect.arrayContaining(sent))
  })

  test('when nobody reads any more it is left off; a failing output and a failing input are told', async () => {
    const work = { width: 2, send: async () => sleep(1), print: async () => true }
    const many = Array.from({ length: 40 }, (_, i) => block(i, `${i}`))
    let printed = 0
    const heard = { ...work, print: async () => ++printed < 5 }
    expect(await runBlocks(inOrder(many), heard)).toBe(false)
    expect(printed).toBeLessThan(15)
    const full = { ...work, print: () => Promise.reject(new Error('disk full')) }
    await expect(runBlocks(inOrder(many), full)).rejects.toThrow('disk full')
    const seen: number[] = []
    const broken = (async function* () {
      yield* many.slice(0, 3)
      throw new Error('unreadable')
    })()
    const kept = { ...work, print: async (one: Block) => seen.push(lineOf(one)) > 0 }
    await expect(runBlocks(broken, kept)).rejects.toThrow('unreadable')
    expect(seen).toEqual([0, 1, 2])
  })
})
