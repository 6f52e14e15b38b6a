import { OgeeError } from '../errors.ts'

/**
 * A code index as typed: decimal, or hex after 0x. Never a rounded number: 1.5 and 1e3 are refused.
 * @throws quantity-unreadable
 * @example parseCode('0x20000', 'code') // 131072
 */
export function parseCode(text: string, label: string): number {
  const clean = text
    .trim()
    .replace(/(?<=^\d{1,3}(?:[\u00a0\u2009\u202f]\d{3})*)[\u00a0\u2009\u202f](?=\d{3}(?!\d))/g, '')
  if (clean === '') throw new OgeeError('quantity-unreadable', `${label} is missing.`)
  const value = /^0[xX][0-9A-Fa-f]{1,12}$/.test(clean)
    ? Number.parseInt(clean.slice(2), 16)
    : /^\d{1,15}$/.test(clean)
      ? Number(clean)
      : Number.NaN
  if (Number.isNaN(value)) {
    throw new OgeeError(
      'quantity-unreadable',
      `${text.trim()} is not a code. Write a whole number, or hex after 0x.`,
    )
  }
  return value
}
