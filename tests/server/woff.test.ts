import { describe, expect, it } from 'vitest'
import { type Face, partsOf } from '../../server/certificate/fonts.ts'
import { openTypeOf } from '../../server/certificate/woff.ts'

/** OpenType 1.9, "Calculating checksums": the sum of a table's 32-bit words, zeros after its end. */
function checksum(table: Buffer): number {
  const padded = Buffer.concat([table, Buffer.alloc((4 - (table.length % 4)) % 4)])
  let sum = 0
  for (let i = 0; i < padded.length; i += 4) sum = (sum + padded.readUInt32BE(i)) >>> 0
  return sum
}

describe('the shipped fonts, taken out of their WOFF files', () => {
  for (const face of ['text', 'strong', 'title', 'mono'] as const satisfies readonly Face[]) {
    for (const { name, file } of partsOf(face)) {
      it(`${name}: every table has the checksum that the font states`, () => {
        const count = file.readUInt16BE(4)
        expect(count).toBeGreaterThan(8)
        for (let i = 0; i < count; i += 1) {
          const at = 12 + i * 16
          const tag = file.toString('latin1', at, at + 4)
          const [stated, offset, length] = [4, 8, 12].map((field) => file.readUInt32BE(at + field)) as [
            number,
            number,
            number,
          ]
          const table = Buffer.from(file.subarray(offset, offset + length))
          expect(table.length, tag).toBe(length)
          // The sum of the whole font stands in `head`, and does not count.
          if (tag === 'head') table.writeUInt32BE(0, 8)
          expect(checksum(table), tag).toBe(stated)
        }
      })
    }
  }

  it('refuses what is no WOFF 1.0 file', () => {
    expect(() => openTypeOf(Buffer.from('wOF2 and no more'))).toThrow('no WOFF 1.0')
  })
})
