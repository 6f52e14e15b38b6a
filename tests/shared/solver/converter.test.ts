import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { codeOfWord, codeOfWordText, wordOf, wordText } from '../../../shared/solver/coding.ts'
import { converterRange, idealV, nearestCode } from '../../../shared/solver/converter.ts'
import { idealTable } from '../../../shared/solver/ideal-table.ts'
import { plainDesign, vector } from '../../support/solver-fixtures.ts'

type Resolution = { rows: { N: number; states: string; lsb_volts_exact: string }[] }
type Coding = {
  bipolar_4bit: { level: string; offset_binary: string; twos_complement: string }[]
  unipolar_4bit_10V: { code: string; volts: string }[]
  key_codes: {
    N: number
    plus_fs_minus_1lsb: { offset_binary_hex: string; twos_complement_hex: string; volts: string }
    mid_scale: { offset_binary_hex: string; twos_complement_hex: string; volts: string }
    minus_fs: { offset_binary_hex: string; twos_complement_hex: string; volts: string }
  }[]
}

const tables = vector<Coding>('coding-tables.json')
const range = (bits: number, lowV: number, highV: number, offsetAt?: 'low-end') =>
  converterRange(plainDesign({ bits, lowV, highV, ...(offsetAt ? { range: { offsetAt } } : {}) }))

describe('converter', () => {
  test('LSB and number of codes equal the resolution table (resolution-table.json)', () => {
    for (const row of vector<Resolution>('resolution-table.json').rows.filter(({ N }) => N >= 4)) {
      expect(range(row.N, 0, 10).lsbV).toBe(Number(row.lsb_volts_exact))
      expect(range(row.N, 0, 10).count).toBe(Number(row.states))
    }
  })

  test('ideal outputs and words equal the coding tables (coding-tables.json)', () => {
    for (const { code, volts } of tables.unipolar_4bit_10V) {
      const [top = '', bottom = '1'] = volts.split('/')
      expect(idealV(range(4, 0, 10), Number.parseInt(code, 2))).toBe(Number(top) / Number(bottom))
    }
    for (const { offset_binary, twos_complement } of tables.bipolar_4bit) {
      const code = Number.parseInt(offset_binary, 2)
      expect(wordOf(code, 4, 'twos-complement')).toBe(Number.parseInt(twos_complement, 2))
      expect(wordOf(code, 4, 'offset-binary')).toBe(code)
    }
    for (const part of tables.key_codes) {
      for (const spot of [part.plus_fs_minus_1lsb, part.mid_scale, part.minus_fs]) {
        const code = Number.parseInt(spot.offset_binary_hex, 16)
        expect(wordText(code, part.N, 'twos-complement')).toBe(`0x${spot.twos_complement_hex}`)
        expect(wordText(code, part.N, 'offset-binary')).toBe(`0x${spot.offset_binary_hex}`)
        expect(idealV(range(part.N, -10, 10), code)).toBe(Number(spot.volts))
      }
    }
  })

  test('word and code are each other’s inverse for every coding and resolution', () => {
    const coding = fc.constantFrom('straight-binary', 'offset-binary', 'twos-complement' as const)
    fc.assert(
      fc.property(
        fc.integer({ min: 4, max: 24 }),
        fc.double({ min: 0, max: 1, maxExcluded: true, noNaN: true }),
        coding,
        (bits, share, kind) => {
          const code = Math.floor(share * 2 ** bits)
          const word = wordOf(code, bits, kind)
          expect(word).toBeGreaterThanOrEqual(0)
          expect(word).toBeLessThan(2 ** bits)
          expect(codeOfWord(word, bits, kind)).toBe(code)
          expect(codeOfWordText(wordText(code, bits, kind), bits, kind)).toBe(code)
        },
      ),
    )
    expect(codeOfWordText('0x1000', 12, 'offset-binary')).toBe(null)
    expect(codeOfWordText('xyz', 12, 'offset-binary')).toBe(null)
  })

  test('a wanted voltage gives the nearest code, halves upward; outside the half-LSB borders nothing', () => {
    const r = range(4, 0, 16)
    expect([0.49, 0.5, 1.5, 14.5, 15.49].map((v) => nearestCode(r, v))).toEqual([0, 1, 2, 15, 15])
    expect(nearestCode(r, -0.5)).toBe(0)
    expect(nearestCode(r, -0.51)).toBe(null)
    expect(nearestCode(r, 15.5)).toBe(null)
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 65535 }),
        fc.double({ min: -0.499, max: 0.499, noNaN: true }),
        (code, off) => {
          const bipolar = range(16, -10, 10)
          expect(nearestCode(bipolar, idealV(bipolar, code) + off * bipolar.lsbV)).toBe(code)
        },
      ),
    )
  })

  test('offset is read at 0 V inside the range, at the low end otherwise or when asked', () => {
    expect(range(16, -10, 10).x0).toBe(0)
    expect(range(16, 0, 10).x0).toBe(0)
    expect(range(16, -10, 10, 'low-end').x0).toBe(-10)
    expect(range(16, 1, 5).x0).toBe(1)
    expect(range(16, -10, 0).x0).toBe(0)
  })

  test('the gain point is full scale when the ends differ by one LSB or less, else the farther end', () => {
    expect(range(16, -10, 10).zGain).toBe(range(16, -10, 10).zFull)
    expect(range(16, -10.24, 10.24).zGain).toBe(range(16, -10.24, 10.24).zFull)
    expect(range(8, -10, 5).zGain).toBe(-10)
    expect(range(8, -5, 10).zGain).toBe(10 - 15 / 256)
  })

  test('the ideal table gives code, word and volts', () => {
    expect(idealTable(plainDesign({ bits: 8, lowV: -1, highV: 1 }), [0, 128])).toEqual([
      { code: 0, word: '0x00', idealV: -1 },
      { code: 128, word: '0x80', idealV: 0 },
    ])
    expect(() => idealTable(plainDesign(), [65536])).toThrow('the highest is 65535')
  })
})
