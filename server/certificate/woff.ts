import { inflateSync } from 'node:zlib'

/**
 * The OpenType font in a WOFF 1.0 file. The font library would inflate every table in script again for each document,
 * which was half the work of a certificate; the engine's zlib does it once.
 * Source: W3C Recommendation "WOFF File Format 1.0", sections 3 to 5; OpenType 1.9, "Organization of an OpenType Font".
 */
export function openTypeOf(woff: Buffer): Buffer {
  if (woff.toString('latin1', 0, 4) !== 'wOFF') throw new TypeError('This is no WOFF 1.0 file.')
  const count = woff.readUInt16BE(12)
  const font = Buffer.alloc(woff.readUInt32BE(16))
  woff.copy(font, 0, 4, 8)
  const exponent = Math.floor(Math.log2(count))
  font.writeUInt16BE(count, 4)
  font.writeUInt16BE(2 ** exponent * 16, 6)
  font.writeUInt16BE(exponent, 8)
  font.writeUInt16BE((count - 2 ** exponent) * 16, 10)
  let place = 12 + count * 16
  for (let i = 0; i < count; i += 1) {
    const from = 44 + i * 20
    const to = 12 + i * 16
    const [offset, packed, length] = [4, 8, 12].map((field) => woff.readUInt32BE(from + field)) as [
      number,
      number,
      number,
    ]
    const stored = woff.subarray(offset, offset + packed)
    woff.copy(font, to, from, from + 4)
    woff.copy(font, to + 4, from + 16, from + 20)
    font.writeUInt32BE(place, to + 8)
    font.writeUInt32BE(length, to + 12)
    ;(packed < length ? inflateSync(stored) : stored).copy(font, place)
    // Every table begins at a multiple of four bytes.
    place += Math.ceil(length / 4) * 4
  }
  return font
}
