import { expect, test } from 'vitest'
import { withText } from '../../../src/features/design-form/form-doc.ts'
import { formReducer, startForm } from '../../../src/features/design-form/form-state.ts'
import { toForm } from '../../../src/features/design-form/to-form.ts'
import { differenceOf, hashOf, whatIfOf, withWhatIf } from '../../../src/features/design-form/what-if.ts'
import { design } from '../../support/web-fixtures.ts'

const form = toForm(design)

test('an address carries only what differs, any text, and gives the same form again', () => {
  let state = startForm(withText(form, 'gain.span', '±5 µV – Ω'))
  state = formReducer(state, { do: 'add-line', which: 'offset', after: null })
  state = formReducer(state, { do: 'add-range' })
  const hash = hashOf(differenceOf(form, state.doc))
  expect(hash).toMatch(/^#try=[A-Za-z0-9_-]+$/)
  const change = whatIfOf(hash)!
  expect(Object.keys(change.values ?? {})).toEqual(['gain.span'])
  expect(change.gain).toBeUndefined()
  expect(withWhatIf(form, change)).toEqual(state.doc)
  expect(hashOf(differenceOf(form, form))).toBe('')
})

const encoded = (value: unknown) => `#try=${btoa(JSON.stringify(value))}`
test.each([
  ['no hash', ''],
  ['not base64', '#try=%%%'],
  ['not JSON', `#try=${btoa('{')}`],
  ['a list', encoded([])],
  ['a number where a text belongs', encoded({ values: { bits: 18 } })],
  ['a line without texts', encoded({ gain: [{ id: 1 }] })],
  ['a range without texts', encoded({ ranges: [{ id: 1, name: 'r' }] })],
])('anything else is taken for nothing: %s', (_, hash) => {
  expect(whatIfOf(hash)).toBeNull()
})
