/**
 * The largest power of ten that is not over a value.
 * @param value over zero and finite
 * @example powerOfTen(250) // 100
 */
export function powerOfTen(value: number): number {
  let power = 1
  while (power * 10 <= value) power *= 10
  while (power > value) power /= 10
  return power
}
