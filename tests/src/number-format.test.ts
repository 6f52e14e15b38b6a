import * as fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { toAscii } from '../../src/ui/clipboard.ts'
import { engineering, exact, fixed, groupDigits } from '../../src/ui/number-format.ts'

const minus = '\u2212'
/** Marks each gap with a dot, to see it. */
const grouped = (text: string) =>
  groupDigits(text)
    .map((piece) => piece.text + (piece.gap ? '·' : ''))
    .join('')

describe('groups of three from the point', () => {
  test.each([
    ['1004317', '1·004·317'],
    ['262143', '262·143'],
    ['2587', '2587'],
    ['9.999962', '9.999·962'],
    ['0.0000013', '0.000·001·3'],
    ['-1021.7', `${minus}1021.7`],
    ['12345.12345', '12·345.123·45'],
    ['+2.10', '+2.10'],
    ['-26.8 mV', `${minus}26.8 mV`],
    ['2.1e-3', `2.1e${minus}3`],
    ['none', 'none'],
  ])('%s is shown as %s', (text, shown) => expect(grouped(text)).toBe(shown))

  test('a copy of any number reads as the same number', async () => {
    await fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => {
        const shown = groupDigits(String(value))
          .map((piece) => piece.text)
          .join('')
        return Object.is(Number(toAscii(shown)), value) || (value === 0 && Number(toAscii(shown)) === 0)
      }),
    )
  })
})

describe('engineering notation', () => {
  test.each([
    [0.0000191, 'V', '19.1 µV'],
    [-0.00002684, 'V', `${minus}26.8 µV`],
    [0.00609, 'V', '6.09 mV'],
    [1180, 'Ω', '1.18 kΩ'],
    [999.96, 'V', '1.00 kV'],
    [0.00099999, 'V', '1.00 mV'],
    [12, 'V', '12.0 V'],
    [0, 'V', '0 V'],
    [203.437, 'ppm', '203 ppm'],
    [1e-15, 'V', '0.00100 pV'],
    [2e9, 'Ω', '2000 MΩ'],
  ])('%d %s is %s', (value, unit, text) => expect(engineering(value, unit)).toBe(text))

  test('a plus only where it is asked for', () => {
    expect(engineering(0.0000019, 'V', 2, 'always')).toBe('+1.9 µV')
    expect(engineering(-0.0000019, 'V', 2, 'always')).toBe(`${minus}1.9 µV`)
  })
})

describe('stored values lose no digit', () => {
  test.each([
    [8660, 'Ω', '8.66 kΩ'],
    [1500, 'Ω', '1.5 kΩ'],
    [1_000_000, 'Ω', '1 MΩ'],
    [-2.5, 'V', `${minus}2.5 V`],
    [0.0000015, 'V', '1.5 µV'],
    [100, 'V', '100 V'],
    [12345.678, 'Ω', '12.345678 kΩ'],
  ])('%d %s is %s', (value, unit, text) => expect(exact(value, unit)).toBe(text))
})

describe('fixed decimals', () => {
  test('zero after rounding has no sign', () => {
    expect(fixed(-0.0004, 2, 'always')).toBe('0.00')
    expect(fixed(0.004, 2, 'always')).toBe('0.00')
  })
  test('signed errors carry their sign', () => {
    expect(fixed(0.17, 2, 'always')).toBe('+0.17')
    expect(fixed(-203.444, 2, 'always')).toBe(`${minus}203.44`)
    expect(fixed(203.444, 2)).toBe('203.44')
  })
})
