import { act, fireEvent, render, screen } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { describe, expect, test } from 'vitest'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { verdictTexts } from '../../../src/features/sizing/verdict-lines.ts'
import { VerdictRows } from '../../../src/features/sizing/verdict-rows.tsx'
import type { Answered, LiveAnswer, View } from '../../../src/screens/design-page/live-answer.ts'
import { type PageAnswer, useAnswerNow } from '../../../src/screens/design-page/use-form-answer.ts'
import { textNodes } from '../../../src/ui/text-nodes.ts'
import { open } from '../../support/web-render.tsx'
import { fakeServer } from '../../support/web-server.ts'
import { states, withGain } from '../sizing/designs.ts'

const explained = (design: (typeof states)[keyof typeof states]) => ({ design, result: sizeDesign(design) })

describe('texts that a key puts in without drawing', () => {
  const all = { ...states, stepless: withGain({ inlLsb: 40 }) }

  test.each(Object.keys(all) as (keyof typeof all)[])(
    'of the state %s are those drawn, in order',
    (state) => {
      const own = explained(all[state])
      const { container } = render(<VerdictRows {...own} />)
      expect(textNodes(container).map(({ data }) => data)).toEqual(verdictTexts(own).texts)
    },
  )

  test('another verdict is another form, another number is not', () => {
    const form = (design: typeof states.covers) => verdictTexts(explained(design)).form
    expect(form(withGain({ bits: 14 }))).toBe(form(states.covers))
    expect(new Set(Object.values(states).map(form)).size).toBe(4)
  })

  test('what is explained on demand is none of them', async () => {
    const own = explained(states.covers)
    const { container } = render(<VerdictRows {...own} />)
    await userEvent.click(screen.getAllByRole('button')[0]!)
    await screen.findByText('Available reach on the tighter side times the effect.')
    expect(textNodes(container).map(({ data }) => data)).toEqual(verdictTexts(own).texts)
  })
})

function Now({ live, drawn }: { live: LiveAnswer; drawn: PageAnswer }) {
  const { box, answered } = useAnswerNow(live, null, drawn)
  const { design, size } = answered.answer!
  return (
    <div ref={box}>
      <VerdictRows design={design} result={size} />
    </div>
  )
}

test('what was put in and then drawn in another form leaves no text of the way', () => {
  const wider = { ...states.covers, sizing: { ...states.covers.sizing, margin: 0.5 } }
  const moments = [states.covers, wider, states.coarse].map((design) => {
    const of = { doc: {}, before: null, measured: null } as unknown as View
    const answer = { design, size: sizeDesign(design), fsrV: 10 }
    return { of, answer, isStale: false } as unknown as Answered
  })
  let at = 0
  const hearers = new Set<() => void>()
  const live = {
    view: () => moments[at]!.of,
    answered: (view: View) => moments.find(({ of }) => of === view)!,
    subscribe: (hear: () => void) => {
      hearers.add(hear)
      return () => hearers.delete(hear)
    },
  } as unknown as LiveAnswer
  const { container } = render(<Now live={live} drawn={moments[0] as PageAnswer} />)
  const number = container.querySelector('button')
  const key = () => {
    at++
    for (const hear of [...hearers]) hear()
  }
  const said = () => textNodes(container).map(({ data }) => data)
  const texts = ({ answer }: Answered) => verdictTexts({ design: answer!.design, result: answer!.size }).texts
  expect(said()).toEqual(texts(moments[0]!))
  // At once, outside of React: nothing is drawn.
  key()
  expect(said()).toEqual(texts(moments[1]!))
  expect(container.querySelector('button')).toBe(number)
  // The offset says again what it said when it was drawn last, so drawing alone would leave the text between.
  act(key)
  expect(said()).toEqual(texts(moments[2]!))
})

test('through any keys the page says what a page opened with the last of them says, its numbers the same elements', async () => {
  open('/designs/DBS-A/revisions/2', fakeServer({ role: 'engineer' }))
  const first = await screen.findByText('gain covers')
  const rows = first.closest('.grid')!
  const said = () => rows.textContent
  const margin = document.querySelector<HTMLInputElement>('[data-field="margin"]')!
  const type = (value: string) => fireEvent.change(margin, { target: { value } })
  const number = rows.querySelector('button')!
  const begun = said()
  type('26 %')
  const at26 = said()
  expect(at26).not.toBe(begun)
  expect(rows.contains(number)).toBe(true)
  // The verdict turns and turns back before React has drawn any of it: no text of the way may stay.
  type('900 %')
  const turned = said()
  expect(turned).toContain('short of reach')
  expect(turned).not.toContain('gain covers')
  type('26 %')
  expect(said()).toBe(at26)
  type('900 %')
  expect(said()).toBe(turned)
  type('wrong')
  expect(said()).toBe(turned)
  type('25 %')
  expect(said()).toBe(begun)
})
