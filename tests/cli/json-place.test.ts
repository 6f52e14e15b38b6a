import fc from 'fast-check'
import { expect, test } from 'vitest'
import { jsonStopsAt, placeInJson } from '../../cli/json-place.ts'

test.each([
  ['{"a": x}', 6],
  ['{"a": 1,}', 8],
  ['[1,]', 3],
  ['{"a" 1}', 5],
  ['{a: 1}', 1],
  ['[1 2]', 3],
  ['{"a": 1} x', 9],
  ['"\\x"', 0],
  ['{"a":', 5],
  ['', 0],
  ['[01]', 2],
])('%s stops at %i', (text, at) => {
  expect(() => JSON.parse(text) as unknown).toThrow()
  expect(jsonStopsAt(text)).toBe(at)
})

test('a text that is JSON never stops, and a cut one stops at its end', () => {
  fc.assert(
    fc.property(fc.json(), fc.double({ min: 0, max: 1, noNaN: true }), (text, share) => {
      expect(jsonStopsAt(text)).toBe(text.length)
      const cut = text.slice(0, Math.floor(share * text.length))
      let isJson = true
      try {
        JSON.parse(cut)
      } catch {
        isJson = false
      }
      if (!isJson) expect(jsonStopsAt(cut)).toBeLessThanOrEqual(cut.length)
      else expect(jsonStopsAt(cut)).toBe(cut.length)
    }),
    { seed: 2, numRuns: 500 },
  )
})

test('the place is said as line and column', () => {
  expect(placeInJson('{\n  "a": 1,\n  b: 2\n}')).toBe('line 3, column 3')
  expect(placeInJson('{\n  "a": 1,')).toBe('its end: something is cut off')
})
