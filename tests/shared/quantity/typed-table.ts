/** What people type, field by field: [text, value in the field's unit]. Grown by rule from pieces that people mix. */
export type Row = { text: string; unit: string; value: number }

const micro = ['u', '\u00b5', '\u03bc']
const gaps = ['', ' ', '\u00a0', '\u2009', '\u202f']
const numbers: readonly [string, string][] = [
  ['1', '1'],
  ['0', '0'],
  ['96', '96'],
  ['4.7', '4.7'],
  ['.5', '0.5'],
  ['5.', '5'],
  ['1.10', '1.10'],
  ['0.012', '0.012'],
  ['4998.9783', '4998.9783'],
  ['1e-3', '0.001'],
  ['2.08E-3', '0.00208'],
  ['+12.5', '12.5'],
  ['-12.5', '-12.5'],
  ['\u221212.5', '-12.5'],
]

/** Moves the decimal point of a plain decimal text by hand: an independent way to the nearest double. */
export function decimalShift(text: string, places: number): number {
  const negative = text.startsWith('-')
  const [whole = '', part = ''] = text.replace('-', '').split('.')
  const digits = `${'0'.repeat(40)}${whole}${part}${'0'.repeat(40)}`
  const point = 40 + whole.length + places
  return Number(`${negative ? '-' : ''}${digits.slice(0, point)}.${digits.slice(point)}`) + 0
}

const rows: Row[] = []
const add = (unit: string, symbols: readonly [string, number][]): void => {
  for (const [symbol, exponent] of symbols)
    for (const [i, [typed, plain]] of numbers.entries())
      rows.push({
        text: `${typed}${gaps[i % gaps.length]}${symbol}`,
        unit,
        value: decimalShift(plain, exponent),
      })
}

add('V', [
  ['V', 0],
  ['mV', -3],
  ['nV', -9],
  ['kV', 3],
  ['MV', 6],
  ['', 0],
  ...micro.map((m): [string, number] => [`${m}V`, -6]),
])
add('ohm', [
  ['ohm', 0],
  ['kohm', 3],
  ['k\u03a9', 3],
  ['k\u2126', 3],
  ['Mohm', 6],
  ['mohm', -3],
  ['k', 3],
  ['M', 6],
  ['m', -3],
  ['R', 0],
  ['kOhm', 3],
])
add('ppm', [
  ['ppm', 0],
  ['%', 4],
  ['ppb', -3],
  ['\u2030', 3],
  ['ppm of FSR', 0],
  ['', 0],
])
add('LSB', [
  ['LSB', 0],
  ['lsb', 0],
])
add('ppm/K', [
  ['ppm/K', 0],
  ['ppm/\u00b0C', 0],
  ['%/K', 4],
  ['ppm / K', 0],
])
add('/V', [
  ['/V', 0],
  ['ppm/V', -6],
  ['%/V', -2],
  ['/mV', 3],
])
add('\u00b0C', [
  ['\u00b0C', 0],
  ['\u2103', 0],
  ['degC', 0],
])
add('A', [['A', 0], ['mA', -3], ...micro.map((m): [string, number] => [`${m}A`, -6])])
add('K', [
  ['K', 0],
  ['mK', -3],
])

rows.push({ text: '2.08e-3 1/V', unit: '/V', value: 2.08e-3 }, { text: '5 1/V', unit: '/V', value: 5 })

export const typedRows: readonly Row[] = rows

/** Cells that must never become a number: [text, unit of the field, words of the refusal]. */
export const refusedRows: readonly [string, string, RegExp][] = [
  ['', 'V', /is missing/],
  ['   ', 'V', /is missing/],
  ['e', 'V', /cannot be read/],
  ['+', 'V', /cannot be read/],
  ['-', 'V', /cannot be read/],
  ['.', 'V', /cannot be read/],
  ['e5', 'V', /cannot be read/],
  ['5e', 'V', /e is not a unit/],
  ['1e+', 'V', /cannot be read|is not a unit/],
  ['1,2 V', 'V', /1,2 V: write 1\.2 V\./],
  ['1.234,5', 'V', /decimal point and without group marks/],
  ['1,234,567', 'V', /without group marks/],
  ['30 uV', 'ppm', /takes ppm or %\. 30 uV is a voltage/],
  ['5 ppm', 'V', /takes V, mV or uV\. 5 ppm is a ratio/],
  ['4.7 kohm', 'V', /is a resistance/],
  ['5 V', 'ohm', /is a voltage/],
  ['4.7k', 'V', /k is not a unit/],
  ['5 mv', 'V', /did you mean mV/],
  ['5 Kohm', 'ohm', /did you mean kohm/],
  ['5 furlong', 'V', /furlong is not a unit/],
  ['NaN', 'V', /cannot be read/],
  ['Infinity', 'V', /cannot be read/],
  ['1e999', 'V', /too large/],
  ['1e-999', 'V', /too small/],
  ['1 2', 'V', /cannot be read/],
  ['1.2.3', 'V', /cannot be read/],
  ['--5', 'V', /cannot be read/],
  ['2026-03-02', 'V', /cannot be read/],
  ['12/03/2026', 'V', /cannot be read/],
  ['10-5', 'V', /cannot be read/],
  ['0x10', 'V', /not a unit|cannot be read/],
  ['five', 'V', /cannot be read/],
  ['20 °C', 'K', /is a temperature/],
  ['1\u00a023', 'V', /cannot be read/],
  ['#REF!', 'V', /cannot be read/],
  ['0.012\u202f1/V', '/V', /two ways/],
]
