import type { Coding } from './types.ts'

/**
 * The word that is sent for a code index: straight and offset binary send the index; two's complement inverts the
 * top bit.
 * @param code 0 to 2^bits - 1
 * Source: W. Kester (ed.), Data Conversion Handbook (2005), chapter 2, bipolar codes.
 * @example wordOf(2048, 12, 'twos-complement') // 0
 */
export function wordOf(code: number, bits: number, coding: Coding): number {
  return coding === 'twos-complement' ? code ^ (1 << (bits - 1)) : code
}

/**
 * The code index of a word; the inverse of `wordOf`, which is its own inverse.
 * @example codeOfWord(0, 12, 'twos-complement') // 2048
 */
export function codeOfWord(word: number, bits: number, coding: Coding): number {
  return wordOf(word, bits, coding)
}

/**
 * The word as text: 0x and as many capital hex digits as the bits need.
 * @example wordText(2593, 12, 'offset-binary') // '0xA21'
 */
export function wordText(code: number, bits: number, coding: Coding): string {
  const digits = Math.ceil(bits / 4)
  return `0x${wordOf(code, bits, coding).toString(16).toUpperCase().padStart(digits, '0')}`
}

/**
 * The code index of a word written in hex, with or without 0x; null when it is no hex or has more bits than the part.
 * @example codeOfWordText('0x7FFF', 16, 'twos-complement') // 65535
 */
export function codeOfWordText(text: string, bits: number, coding: Coding): number | null {
  const match = /^(?:0[xX])?([0-9A-Fa-f]{1,12})$/.exec(text)
  if (match === null) return null
  const word = Number.parseInt(match[1]!, 16)
  return word < 2 * (1 << (bits - 1)) ? codeOfWord(word, bits, coding) : null
}
