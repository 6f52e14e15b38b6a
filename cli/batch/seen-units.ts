import { createHash } from 'node:crypto'
import type { SeenLines } from '../../shared/points/reader.ts'

const wordsEach = 4
const slotsAtFirst = 1 << 12

/**
 * Which measurements a file of any length has had: 16 bytes a slot, at most half of them in use, where a Map of names would
 * take ten times as much. A measurement is known by 96 bits of its SHA-256, so two that differ are never taken for one.
 */
export class SeenUnits implements SeenLines {
  private slots = slotsAtFirst
  private used = 0
  /** Three words of the hash and the line; a line of 0 is a free slot. */
  private table = new Uint32Array(slotsAtFirst * wordsEach)

  firstLine(measurement: string, line: number): number | undefined {
    const digest = createHash('sha256').update(measurement).digest()
    const words = [0, 4, 8].map((at) => digest.readUInt32LE(at)) as [number, number, number]
    const at = this.find(words)
    const first = this.table[at + 3]!
    if (first !== 0) return first
    this.table.set([...words, line], at)
    this.used += 1
    if (this.used * 2 > this.slots) this.grow()
    return undefined
  }

  /** Where these words stand, or the free place where they would. */
  private find([a, b, c]: readonly [number, number, number]): number {
    const { table } = this
    for (let slot = a % this.slots; ; slot = (slot + 1) % this.slots) {
      const at = slot * wordsEach
      if (table[at + 3] === 0) return at
      if (table[at] === a && table[at + 1] === b && table[at + 2] === c) return at
    }
  }

  private grow(): void {
    const old = this.table
    this.slots *= 2
    this.table = new Uint32Array(this.slots * wordsEach)
    for (let at = 0; at < old.length; at += wordsEach) {
      if (old[at + 3] === 0) continue
      this.table.set(old.subarray(at, at + wordsEach), this.find([old[at]!, old[at + 1]!, old[at + 2]!]))
    }
  }
}
