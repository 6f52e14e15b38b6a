import { expect, test } from 'vitest'
import { withText } from '../../../src/features/design-form/form-doc.ts'
import { startForm } from '../../../src/features/design-form/form-state.ts'
import { createFormStore } from '../../../src/features/design-form/form-store.ts'
import { toForm } from '../../../src/features/design-form/to-form.ts'
import { createLiveAnswer } from '../../../src/screens/design-page/live-answer.ts'
import { design } from '../../support/web-fixtures.ts'

function started() {
  const store = createFormStore(startForm(toForm(design)))
  return { store, live: createLiveAnswer(store) }
}

test('a key is heard by its own field and no other; another document by all', () => {
  const { store } = started()
  const heard: string[] = []
  for (const field of ['margin', 'bits', 'line.gain.2.limit']) {
    store.subscribeField(field, () => heard.push(field))
  }
  const leave = store.subscribe((isKey) => heard.push(isKey ? 'key' : 'all'))
  store.dispatch({ do: 'set', field: 'margin', text: '30 %' })
  expect(heard.splice(0)).toEqual(['margin', 'key'])
  store.dispatch({ do: 'leave' })
  store.dispatch({ do: 'set', field: 'margin', text: '30 %' })
  expect(heard).toEqual([])
  store.dispatch({ do: 'undo' })
  expect(heard.splice(0)).toEqual(['margin', 'bits', 'line.gain.2.limit', 'all'])
  leave()
  store.dispatch({ do: 'redo' })
  expect(heard).not.toContain('all')
})

test('the answer is of the key just typed, and is worked out once', () => {
  const { store, live } = started()
  const before = live.answered(live.view(), null)
  store.dispatch({ do: 'set', field: 'target', text: '1 LSB' })
  const after = live.answered(live.view(), null)
  expect(after.of.doc).toBe(store.get().doc)
  expect(after.answer?.size.adjusters.gain?.requiredBits).toBeLessThan(
    before.answer?.size.adjusters.gain?.requiredBits ?? 0,
  )
  expect(live.answered(live.view(), null)).toBe(after)
  // What is drawn later may still ask for the moment before.
  expect(live.answered(before.of, null)).toBe(before)
})

test('an error keeps the last good answer and says so; a part that was not touched is not read again', () => {
  const { store, live } = started()
  const good = live.answered(live.view(), null).answer
  store.dispatch({ do: 'set', field: 'target', text: '30 K' })
  const wrong = live.answered(live.view(), null)
  expect(wrong).toMatchObject({ draft: null, isStale: true })
  expect(wrong.answer).toBe(good)
  expect([...wrong.said.problems.keys()]).toEqual(['target'])
  store.dispatch({ do: 'set', field: 'target', text: '0.5 LSB' })
  const again = live.answered(live.view(), null)
  expect(again.isStale).toBe(false)
  expect(again.draft?.adjusters.gain).toBe(good?.design.adjusters.gain)
  store.dispatch({ do: 'replace', doc: withText(store.get().doc, 'gain.bits', '14 bits') })
  expect(live.answered(live.view(), null).draft?.adjusters.gain?.source.bits).toBe(14)
})
