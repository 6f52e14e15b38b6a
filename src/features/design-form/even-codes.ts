/** What "5 even" stands for: codes from the lowest to the highest in equal steps. */
export function evenCodes(count: number, bits: number): number[] {
  const top = 2 ** bits - 1
  const step = 2 ** bits / (count - 1)
  return Array.from({ length: count }, (_, i) => Math.min(Math.round(i * step), top))
}
