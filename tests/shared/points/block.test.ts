import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { type GridColumn, parseBlock } from '../../../shared/points/parse-block.ts'
import { evaluateQuantity } from '../../../shared/quantity/arithmetic.ts'

const values = (text: string, columns: GridColumn[], options = {}) =>
  parseBlock(text, columns, options).rows.map((row) => row.map(({ value }) => value))

describe('pasted block', () => {
  test('the refusal with a decimal comma reads as designed, and one answer takes all', () => {
    const text = '1.3e-06\r\n2.4994998\r\n4.9989783\r\n7,4984718\r\n9.9979342\r\n0\r\n'
    const block = parseBlock(text, ['measured'])
    expect(block.summary).toBe('5 of 6 cells taken. Cell 4, 7,4984718: a comma. Is it a decimal comma?')
    expect([block.taken, block.filled, block.asksComma]).toEqual([5, 6, true])
    const again = parseBlock(text, ['measured'], { decimalComma: true })
    expect([again.summary, again.rows[3]![0]!.value]).toEqual([null, 7.4984718])
  })

  test('rows and columns, quoted cells, empty cells and the trailing line end', () => {
    expect(values('0\t"0.5"\t\r\n\t1 mV\t2\r\n', ['code', 'measured', 'uncertainty'])).toEqual([
      [0, 0.5, null],
      [null, 0.001, 2],
    ])
    expect(values('1\n\n2\n', ['measured'])).toEqual([[1], [null], [2]])
  })

  test('commas and semicolons delimit only where they can be nothing else', () => {
    expect(values('0,1.5\n65535,2.5', ['code', 'measured'])).toEqual([
      [0, 1.5],
      [65535, 2.5],
    ])
    expect(values('0;1,5\n1;2,5', ['code', 'measured'], { decimalComma: true })).toEqual([
      [0, 1.5],
      [1, 2.5],
    ])
    expect(values('1;2;3', ['readings'])).toEqual([[[1, 2, 3]]])
    expect(parseBlock('1,5\n2,5', ['measured', 'uncertainty']).asksComma).toBe(true)
  })

  test('cells beyond the grid, words and arithmetic each say what they are', () => {
    const [row] = parseBlock('1\t2', ['measured']).rows
    expect(row![1]).toMatchObject({ value: null, message: '2: there is no column for it.' })
    expect(parseBlock('volts', ['measured']).rows[0]![0]).toMatchObject({ value: null, comma: false })
    const cell = parseBlock('10/4096 V', ['measured']).rows[0]![0]!
    expect([cell.value, cell.arithmetic]).toEqual([null, true])
    expect(values('10/4096 V', ['measured'], { arithmetic: evaluateQuantity })).toEqual([[10 / 4096]])
  })

  test('U5: 2,000 generated clipboards are right or refused cell by cell, never changed', () => {
    const number = fc.tuple(fc.integer({ min: -99999, max: 99999 }), fc.integer({ min: 0, max: 5 }))
    const style = fc.record({
      minus: fc.constantFrom('-', '\u2212'),
      mark: fc.constantFrom('.', ','),
      unit: fc.constantFrom('', ' V', 'mV', ' uV', ' \u00b5V', ' \u03bcV', '\u00a0V'),
      quote: fc.boolean(),
      noise: fc.constantFrom('', '', '', '', '', 'x', ' 2', ',5', '.1', '%'),
    })
    const cell = fc.tuple(number, style).map(([[digits, decimals], s]) => {
      const size = String(Math.abs(digits)).padStart(decimals + 1, '0')
      const whole = size.slice(0, size.length - decimals)
      const part = decimals === 0 ? '' : `${s.mark}${size.slice(size.length - decimals)}`
      const text = `${digits < 0 ? s.minus : ''}${whole}${part}${s.noise}${s.unit}`
      const power = { mV: -3, uV: -6 }[s.unit.trim().replace(/[\u00b5\u03bc]/, 'u')] ?? 0
      const value = Number(`${digits}e${power - decimals}`) + 0
      return { text, comma: decimals > 0 && s.mark === ',', clean: s.noise === '', value, quote: s.quote }
    })
    const clipboard = fc.record({
      rows: fc.array(fc.tuple(cell, cell), { minLength: 1, maxLength: 6 }),
      end: fc.constantFrom('\n', '\r\n', '\r'),
      trailing: fc.boolean(),
      decimalComma: fc.boolean(),
    })
    let right = 0
    let refused = 0
    fc.assert(
      fc.property(clipboard, ({ rows, end, trailing, decimalComma }) => {
        const quoted = (c: { text: string; quote: boolean }) => (c.quote ? `"${c.text}"` : c.text)
        const text = rows.map(([a, b]) => `${quoted(a)}\t${quoted(b)}`).join(end) + (trailing ? end : '')
        const block = parseBlock(text, ['measured', 'target'], { decimalComma })
        expect(block.rows).toHaveLength(rows.length)
        for (const [i, row] of rows.entries())
          for (const [j, made] of row.entries()) {
            const got = block.rows[i]![j]!
            const { comma, clean, value } = made
            expect(got.text).toBe(made.text)
            if (clean && (!comma || decimalComma)) {
              expect(got.value).toBe(value)
              right += 1
            } else if (clean) {
              expect([got.value, got.comma]).toEqual([null, true])
              refused += 1
            } else if (got.value !== null) {
              // Noise may still make a number (".1" after a whole one): then it is the number that stands there.
              expect(got.value).toBe(standing(made.text, decimalComma))
            } else expect(got.message).not.toBe(null)
          }
      }),
      { numRuns: 2000 },
    )
    expect(right).toBeGreaterThan(1000)
    expect(refused).toBeGreaterThan(500)
  })
})

/** The number that a cell shows, read by another way: plain decimal, one mark, one known unit. */
function standing(text: string, decimalComma: boolean): number {
  const match = /^([-\u2212]?)(\d+)(?:([.,])(\d+))?[\s\u00a0]*(|V|mV|[u\u00b5\u03bc]V)$/.exec(text)
  if (!match || (match[3] === ',' && !decimalComma)) return Number.NaN
  const power = match[5] === 'mV' ? -3 : match[5] === '' || match[5] === 'V' ? 0 : -6
  return Number(`${match[1] ? '-' : ''}${match[2]}.${match[4] ?? '0'}e${power}`) + 0
}
