import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { isOgeeError } from '../../../shared/errors.ts'
import { parseCode } from '../../../shared/quantity/code.ts'
import { copyText, engineering, fixed } from '../../../shared/quantity/format.ts'
import { needsArithmetic, parseQuantity, parseQuantityAsync } from '../../../shared/quantity/parse.ts'
import { refusedRows, typedRows } from './typed-table.ts'

const field = (unit: string) => ({ label: 'Limit', unit })
function read(text: string, unit: string, options = {}): number {
  const quantity = parseQuantity(text, field(unit), options)
  if (quantity === needsArithmetic) throw new Error('arithmetic')
  return quantity.value
}

describe('quantities', () => {
  test('U6: what people type is the nearest double of what stands there, over 500 rows, and the text is kept', () => {
    expect(typedRows.length).toBeGreaterThanOrEqual(500)
    const wrong = typedRows.flatMap(({ text, unit, value }) => {
      const quantity = parseQuantity(text, field(unit))
      if (quantity === needsArithmetic) return [`${text}: arithmetic`]
      const right = Object.is(quantity.value, value) && quantity.typed === text && quantity.unit === unit
      return right ? [] : [`${text} in ${unit}: ${quantity.value}, not ${value}`]
    })
    expect(wrong).toEqual([])
  })

  test.each(refusedRows)('%j for %s is refused, never a number', (text, unit, words) => {
    try {
      const got = parseQuantity(text, field(unit))
      expect.fail(`read as ${String(got === needsArithmetic ? 'arithmetic' : got.value)}`)
    } catch (error) {
      if (!isOgeeError(error)) throw error
      expect(error.code).toMatch(/^quantity-/)
      expect(error.message).toMatch(words)
    }
  })

  test('a field that takes several kinds says which it got', () => {
    const target = { label: 'Target', unit: 'LSB', also: ['ppm', 'V'] }
    expect(parseQuantity('0.5', target)).toMatchObject({ value: 0.5, unit: 'LSB', kind: 'lsb' })
    expect(parseQuantity('0.01 %', target)).toMatchObject({ value: 100, unit: 'ppm', kind: 'ratio' })
    expect(parseQuantity('19 uV', target)).toMatchObject({ value: 19e-6, unit: 'V', kind: 'voltage' })
    expect(() => parseQuantity('4.7 kohm', target)).toThrow('Target takes LSB, or ppm or %, or V, mV or uV.')
  })

  test('any decimal in any prefix equals the same decimal written without one', () => {
    const decimal = fc.tuple(fc.integer({ min: -999999999, max: 999999999 }), fc.integer({ min: -8, max: 8 }))
    const prefix = fc.constantFrom<[string, number]>(
      ['p', -12],
      ['n', -9],
      ['u', -6],
      ['m', -3],
      ['k', 3],
      ['M', 6],
    )
    fc.assert(
      fc.property(decimal, prefix, ([digits, exponent], [symbol, power]) => {
        expect(read(`${digits}e${exponent} ${symbol}V`, 'V')).toBe(
          Number(`${digits}e${exponent + power}`) + 0,
        )
      }),
    )
  })

  test('groups of three with thin gaps are one number; a plain space is not', () => {
    expect(read('131\u2009072', 'V')).toBe(131072)
    expect(read('4\u202f998.978\u202f3 mV', 'V')).toBe(4.9989783)
    expect(() => read('4 998.9783 mV', 'V')).toThrow('cannot be read')
  })

  test('a decimal comma is read only when the caller says so, and only where it is clear', () => {
    expect(read('7,4984718', 'V', { decimalComma: true })).toBe(7.4984718)
    expect(read('-12,5 uV', 'V', { decimalComma: true })).toBe(-12.5e-6)
    expect(read('7.4984718', 'V', { decimalComma: true })).toBe(7.4984718)
    for (const text of ['1.234,5', '1,2,3', '1,', ',5,', '7,49 84']) {
      expect(() => read(text, 'V', { decimalComma: true }), text).toThrow()
    }
  })

  test('codes are whole numbers, decimal or hex; nothing is rounded into one', () => {
    expect(['0', '131072', '0x20000', ' 65\u2009536 ', '0Xff'].map((t) => parseCode(t, 'code'))).toEqual([
      0, 131072, 131072, 65536, 255,
    ])
    for (const text of ['', '1.5', '1e3', '-1', '0x', 'FF', '12 V', '1 000'])
      expect(() => parseCode(text, 'code'), text).toThrow()
  })
})

describe('arithmetic', () => {
  const load = () => import('../../../shared/quantity/arithmetic.ts')
  const calc = async (text: string, unit: string) => (await parseQuantityAsync(text, field(unit), load)).value

  test('sums and products with units', async () => {
    expect(await calc('10/4096 V', 'V')).toBe(10 / 4096)
    expect(await calc('3*12 uV + 5 uV', 'V')).toBeCloseTo(41e-6, 18)
    expect(await calc('2 * 0.01 % + 50 ppm', 'ppm')).toBeCloseTo(250, 10)
    expect(await calc('1/480 /V', '/V')).toBeCloseTo(1 / 480, 15)
    expect(await calc('sqrt(4) * 2.5 V', 'V')).toBe(5)
    expect(await calc('(3 + 1) * 1.5', 'V')).toBe(6)
    expect(await calc('0.5 LSB + 0.25 LSB', 'LSB')).toBe(0.75)
    expect(await calc('5 V / 10 mA', 'ohm')).toBeCloseTo(500, 9)
    expect(await calc('2 × 3 µV', 'V')).toBeCloseTo(6e-6, 18)
  })

  test('a plain quantity never loads it', async () => {
    const never = () => Promise.reject(new Error('loaded'))
    expect((await parseQuantityAsync('96 mV', field('V'), never)).value).toBe(0.096)
    await expect(parseQuantityAsync('2*3 V', field('V'), never)).rejects.toMatchObject({
      code: 'arithmetic-unavailable',
    })
  })

  test.each([
    ['2 * 3 ohm', /takes V, mV or uV\. 2 \* 3 ohm is a resistance/],
    ['1 V + 1 ohm', /not arithmetic with fitting units/],
    ['1/0 V', /not a finite/],
    ['2 ** 3', /not arithmetic|not read/],
    ['import("x") * 2', /not read here/],
    ['createUnit("q") * 2', /not read here/],
    ['evaluate("2*3")', /not read here/],
    ['parse("2*3")', /not read here/],
    ['simplify("2*3")', /not read here/],
    ['derivative("x^2", "x") * 2', /not read here|without group marks/],
    ['f(x) = 2 * x', /not read here/],
    ['a = 2 * 3', /not read here/],
    ['[1, 2] * 2', /not read here|without group marks|write/],
    ['2 * 3; 4', /not read here/],
    ['(1).constructor', /not read here|not arithmetic/],
    ['2 * random()', /not read here/],
    ['2 * i', /not read here/],
    ['5 mod 3 * 2', /not read here|not arithmetic/],
    ['3! * 2', /not read here/],
    ['2 * 3 > 1', /not read here/],
    [`${'1 + '.repeat(60)}1`, /200 characters/],
  ])('%j is refused', async (text, words) => {
    await expect(calc(text, 'V')).rejects.toThrow(words)
  })
})

describe('numbers on a screen and on the clipboard', () => {
  test.each([
    [1.907e-5, 'V', '19.1 µV'],
    [-0.000999951, 'V', '\u22121.00 mV'],
    [0.9996, 'V', '1.00 V'],
    [999.4, 'V', '999 V'],
    [4700, 'Ω', '4.70 kΩ'],
    [0, 'V', '0.00 V'],
    [390, 'ppm', '390 ppm'],
    [-0.5, 'LSB', '\u22120.500 LSB'],
  ])('%d %s is shown as %s', (value, unit, shown) => {
    expect(engineering(value, unit)).toBe(shown)
  })

  test('plus for signed errors only when asked; zero after rounding has no sign', () => {
    expect(engineering(1.2e-6, 'V', { plus: true })).toBe('+1.20 µV')
    expect(fixed(-0.0004, 3)).toBe('0.000')
    expect(fixed(0.0004, 3, true)).toBe('0.000')
    expect(fixed(-12.3456, 2)).toBe('\u221212.35')
    expect(fixed(12.3456, 2, true)).toBe('+12.35')
  })

  test('U6: what is copied is ASCII and pastes back to the same double, for any double', () => {
    const units = fc.constantFrom<[string, string]>(
      ['V', 'V'],
      ['Ω', 'ohm'],
      ['ppm', 'ppm'],
      ['LSB', 'LSB'],
      ['A', 'A'],
      ['°C', '°C'],
    )
    fc.assert(
      fc.property(
        fc.double({ noNaN: true, noDefaultInfinity: true, min: -1e200, max: 1e200 }),
        units,
        (value, [shown, unit]) => {
          fc.pre(value === 0 || Math.abs(value) > 1e-200)
          const text = copyText(value, shown)
          expect(text).toMatch(/^[\x20-\x7e]+$/)
          expect(read(text, unit)).toBe(value + 0)
        },
      ),
      { numRuns: 2000 },
    )
  })

  test('the screen’s own text reads back to what it shows', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, min: 1e-11, max: 1e8 }), (value) => {
        const back = read(engineering(-value, 'V'), 'V')
        expect(Math.abs(back / -value - 1)).toBeLessThan(0.0051)
      }),
    )
  })
})
