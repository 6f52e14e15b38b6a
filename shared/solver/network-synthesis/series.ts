/**
 * Preferred resistor values of IEC 60063:2015: E24 with two digits, E96 and E192 with three. E96 is every second value of
 * E192. Written out, because the standard's values are not all the rounded powers (E24 27 to 47 and 82, E192 920).
 */
export type Series = 'E24' | 'E96' | 'E192'
export const allSeries: readonly Series[] = ['E24', 'E96', 'E192']

const e24 = [10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91]
const e192 = [
  100, 101, 102, 104, 105, 106, 107, 109, 110, 111, 113, 114, 115, 117, 118, 120, 121, 123, 124, 126, 127,
  129, 130, 132, 133, 135, 137, 138, 140, 142, 143, 145, 147, 149, 150, 152, 154, 156, 158, 160, 162, 164,
  165, 167, 169, 172, 174, 176, 178, 180, 182, 184, 187, 189, 191, 193, 196, 198, 200, 203, 205, 208, 210,
  213, 215, 218, 221, 223, 226, 229, 232, 234, 237, 240, 243, 246, 249, 252, 255, 258, 261, 264, 267, 271,
  274, 277, 280, 284, 287, 291, 294, 298, 301, 305, 309, 312, 316, 320, 324, 328, 332, 336, 340, 344, 348,
  352, 357, 361, 365, 370, 374, 379, 383, 388, 392, 397, 402, 407, 412, 417, 422, 427, 432, 437, 442, 448,
  453, 459, 464, 470, 475, 481, 487, 493, 499, 505, 511, 517, 523, 530, 536, 542, 549, 556, 562, 569, 576,
  583, 590, 597, 604, 612, 619, 626, 634, 642, 649, 657, 665, 673, 681, 690, 698, 706, 715, 723, 732, 741,
  750, 759, 768, 777, 787, 796, 806, 816, 825, 835, 845, 856, 866, 876, 887, 898, 909, 920, 931, 942, 953,
  965, 976, 988,
]

/** The values of one decade as whole numbers: 10 to 91 (E24), 100 to 976 (E96), 100 to 988 (E192). */
export function decadeOf(series: Series): readonly number[] {
  if (series === 'E24') return e24
  return series === 'E192' ? e192 : e192.filter((_, i) => i % 2 === 0)
}

/**
 * All values of a series from one resistance to another, both counted, rising.
 * @param lowOhm over 0; @param highOhm ohm
 * Source: IEC 60063:2015.
 * @example seriesValues('E24', 1000, 1300) // [1000, 1100, 1200, 1300]
 */
export function seriesValues(series: Series, lowOhm: number, highOhm: number): number[] {
  const decade = decadeOf(series)
  const values: number[] = []
  // Whole numbers times or by a whole power of ten: each value is the double nearest to its name.
  for (let power = -3; power <= 9; power++) {
    const ten = tenTo(Math.abs(power))
    for (const value of decade) {
      const ohm = power < 0 ? value / ten : value * ten
      if (ohm >= lowOhm && ohm <= highOhm) values.push(ohm)
    }
  }
  return values
}

function tenTo(power: number): number {
  let result = 1
  for (let i = 0; i < power; i++) result *= 10
  return result
}
