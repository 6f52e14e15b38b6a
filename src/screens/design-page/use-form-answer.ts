import {
  startTransition,
  useCallback,
  useEffect,
  useLayoutEffect,
  useMemo,
  useReducer,
  useRef,
  useState,
} from 'react'
import { flushSync } from 'react-dom'
import type { Design } from '../../../shared/contract/design.ts'
import { checkDraft } from '../../features/design-form/read-form.ts'
import { type VerdictTexts, verdictTexts } from '../../features/sizing/verdict-lines.ts'
import { putTexts, textNodes } from '../../ui/text-nodes.ts'
import type { Answered, LiveAnswer } from './live-answer.ts'

export type PageAnswer = Answered & {
  /** By the contract, ready to be kept or sent; null while anything is in error. */
  document: Design | null
  isGood: boolean
}

/**
 * The form and its answer as the page draws them: a moment after a key, giving way to the next one, and at once after
 * anything else. `catchUp` draws what is still to come, for acts on the whole document.
 */
export function useFormAnswer(live: LiveAnswer, range: string | null) {
  const [view, setView] = useState(live.view)
  useEffect(() => {
    const follow = () => setView(live.view())
    follow()
    let timer: ReturnType<typeof setTimeout> | undefined
    const followLater = () => {
      timer = undefined
      startTransition(follow)
    }
    const leave = live.subscribe((isKey) => {
      if (!isKey) return follow()
      // The frame of the key goes first.
      timer ??= setTimeout(followLater)
    })
    return () => {
      leave()
      clearTimeout(timer)
    }
  }, [live])
  const catchUp = useCallback(() => flushSync(() => setView(live.view())), [live])
  const answered = live.answered(view, range)
  const checked = useMemo(() => withCheck(answered), [answered])
  const said = useRef(checked.said)
  if (!sameSaid(said.current, checked.said)) said.current = checked.said
  const steady = said.current
  const page = useMemo((): PageAnswer => ({ ...checked, said: steady }), [checked, steady])
  return { view, answered: page, catchUp }
}

/**
 * The same with the key: for the sentences of the verdict, which follow each. Where only their texts change, these are put
 * into the page as it stands; drawing them takes a third of what a key may. What is explained on demand follows later.
 * @returns `box`, for the element that holds the verdict rows and nothing else
 */
export function useAnswerNow(live: LiveAnswer, range: string | null, drawn: PageAnswer) {
  const box = useRef<HTMLDivElement>(null)
  const [, draw] = useReducer((times: number) => times + 1, 0)
  const view = live.view()
  const answered = view === drawn.of ? drawn : live.answered(view, range)
  useLayoutEffect(() => {
    let shown = textsOf(answered)
    const nodes = box.current ? textNodes(box.current) : []
    const isWhole = shown !== null && shown.texts.length === nodes.length
    // React compares with what it drew last, and not with what was put in since.
    if (isWhole) putTexts(nodes, shown!.texts)
    const follow = () => {
      const next = textsOf(live.answered(live.view(), range))
      if (!isWhole || next === null || next.form !== shown?.form) return draw()
      putTexts(nodes, next.texts)
      shown = next
    }
    // A key may have come between drawing and now.
    if (live.view() !== view) follow()
    return live.subscribe(follow)
  }, [live, range, view, answered])
  return { box, answered }
}

/** Null where more, or less, than the verdict stands there. */
const textsOf = ({ answer, isStale }: Answered): VerdictTexts | null =>
  answer === null || isStale ? null : verdictTexts({ design: answer.design, result: answer.size })

/** The check against the contract takes some milliseconds, more than a key may. */
function withCheck(answered: Answered): PageAnswer {
  const { draft, of, said, answer } = answered
  const checked = draft === null ? null : checkDraft(of.doc, draft)
  const document = checked?.document ?? null
  if (checked === null || document !== null) return { ...answered, document, isGood: document !== null }
  const problems = new Map([...said.problems, ...checked.problems])
  return { ...answered, said: { ...said, problems }, isStale: answer !== null, document, isGood: false }
}

type Sayings = ReadonlyMap<string, string>
const sameMap = (a: Sayings, b: Sayings) =>
  a.size === b.size && [...a].every(([at, why]) => b.get(at) === why)
const sameSaid = (a: Answered['said'], b: Answered['said']) =>
  sameMap(a.problems, b.problems) && sameMap(a.remarks, b.remarks)
