import { type KeyboardEvent, memo, type ReactNode, useState } from 'react'
import { Button } from '../../ui/button.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { SelectCell, TextCell } from './cells.tsx'
import { type Said, useFieldText, useFormLinks } from './form-context.ts'
import { both, type FormDoc, kOf, type Line, type LineField, lineField, type Which } from './form-doc.ts'
import { Part } from './part.tsx'
import { shapes, times } from './words.ts'

const tones = { gain: 'text-copper', offset: 'text-tide' } as const
const firstShown = 40
const offeredShapes = new Set(shapes.map(([shape]) => shape).filter((shape) => shape !== 'normal '))
const otherShape = (shape: string) => `normal k=${kOf(shape) ?? ''}`
type Problems = Partial<Record<LineField | 'k', string>>
const none: Problems = {}

/** "390 ppm / 321 ppm", of the last answer; null while there is none. */
export type Sums = Readonly<Record<Which, string | null>> & {
  /** How many measured units stand in the place of the initial lines; null for none. */
  units: number | null
}

export const BudgetPart = memo(function BudgetPart({
  lines,
  said,
  sums,
  children,
}: {
  lines: FormDoc['lines']
  said: Said
  sums: Sums
  /** Where else extents may come from. */
  children?: ReactNode
}) {
  const { isReadOnly } = useFormLinks()
  const side = isReadOnly ? null : (
    <span className="print:hidden">
      add a line <KeyHint keys="Enter" />
    </span>
  )
  return (
    <Part number={3} title="Error budget" side={side} problem={said.problems.get('budget')}>
      <div
        className="hidden grid-cols-[minmax(0,1fr)_4.25rem_5.5rem_4.25rem_1.25rem] gap-x-1.5 text-small font-medium text-ink-2 narrow:grid print:hidden"
        aria-hidden="true"
      >
        <span className="px-1">Line</span>
        <span className="px-1">limit</span>
        <span className="px-1">shape</span>
        <span className="px-1">when</span>
      </div>
      {both.map((which) => (
        <Lines
          key={which}
          which={which}
          lines={lines[which]}
          said={said}
          sum={sums[which]}
          units={sums.units}
        />
      ))}
      {children}
    </Part>
  )
})

function Lines({
  which,
  lines,
  said: { problems, remarks },
  sum,
  units,
}: {
  which: Which
  lines: readonly Line[]
  said: Said
  sum: string | null
  units: number | null
}) {
  const { store, isReadOnly } = useFormLinks()
  const [shown, setShown] = useState(firstShown)
  const [withBias, setWithBias] = useState(false)
  const hasBias = withBias || lines.some((line) => line.nominal !== '' || line.pivot !== '')
  const remark = problems.get(`budget.${which}`) ?? remarks.get(`budget.${which}`)
  return (
    <>
      {lines.slice(0, shown).map((line, i) => (
        <LineRow
          key={line.id}
          which={which}
          id={line.id}
          number={i + 1}
          hasBias={hasBias}
          problems={problemsOf(problems, which, line.id)}
        />
      ))}
      {lines.length > shown ? (
        <Button look="quiet" className="text-small" onClick={() => setShown(shown + 200)}>
          {`show more of ${lines.length} ${which} lines`}
        </Button>
      ) : null}
      <div className="flex min-h-6 flex-wrap items-center gap-x-3 text-small">
        <span className={tones[which]}>
          {units === null ? `${which}, worst case / RSS` : `${which}, ${units} units and drift`}
        </span>
        <strong className="font-semibold">{sum}</strong>
        {isReadOnly ? null : (
          <span className="ml-auto flex gap-x-2">
            {lines.length === 0 ? (
              <Button
                look="quiet"
                className="text-small"
                onClick={() => {
                  store.dispatch({ do: 'add-line', which, after: null })
                  focusNewest(which)
                }}
              >
                {`add a ${which} line`}
              </Button>
            ) : hasBias ? null : (
              <Button look="quiet" className="text-small" onClick={() => setWithBias(true)} tabIndex={-1}>
                {`${which} bias`}
              </Button>
            )}
          </span>
        )}
      </div>
      {remark ? <p className="text-small text-caution">{remark}</p> : null}
    </>
  )
}

function problemsOf(problems: ReadonlyMap<string, string>, which: Which, id: number): Problems {
  if (problems.size === 0) return none
  const own: Problems = {}
  for (const name of ['name', 'limit', 'shape', 'k', 'when', 'nominal', 'pivot'] as const) {
    const why = problems.get(lineField(which, id, name))
    if (why !== undefined) own[name] = why
  }
  return Object.keys(own).length === 0 ? none : own
}

/** After React has drawn it. */
function focusNewest(which: Which, after?: number): void {
  requestAnimationFrame(() => {
    const rows = [...document.querySelectorAll<HTMLElement>(`[data-line^="${which}."]`)]
    const at =
      after === undefined
        ? rows.length - 1
        : rows.findIndex((row) => row.dataset.line === `${which}.${after}`) + 1
    rows[at]?.querySelector<HTMLElement>('input')?.focus()
  })
}

const LineRow = memo(function LineRow({
  which,
  id,
  number,
  hasBias,
  problems,
}: {
  which: Which
  id: number
  number: number
  hasBias: boolean
  problems: Problems
}) {
  const { store, isReadOnly } = useFormLinks()
  const shape = useFieldText(lineField(which, id, 'shape'))
  const hasOtherK = kOf(shape) !== undefined && !offeredShapes.has(shape)
  const cell = (name: LineField | 'k', label: string) => ({
    field: lineField(which, id, name),
    label: `${label}, ${which} line ${number}`,
    problem: problems[name],
  })
  const remove = () => store.dispatch({ do: 'remove-line', which, id })
  const onKeyDown = (event: KeyboardEvent<HTMLElement>) => {
    const target = event.target as HTMLElement
    if (isReadOnly) return
    if (event.key === 'Enter' && target instanceof HTMLInputElement && !event.ctrlKey) {
      event.preventDefault()
      store.dispatch({ do: 'add-line', which, after: id })
      focusNewest(which, id)
    } else if (event.altKey && (event.key === 'ArrowUp' || event.key === 'ArrowDown')) {
      event.preventDefault()
      store.dispatch({ do: 'move-line', which, id, by: event.key === 'ArrowUp' ? -1 : 1 })
      // The row keeps its element, and moving an element takes the focus from it.
      requestAnimationFrame(() => target.focus())
    }
  }
  return (
    // biome-ignore lint/a11y/useSemanticElements: a fieldset cannot be a grid everywhere, and the group has no legend to show
    <div
      role="group"
      aria-label={`${which} line ${number}`}
      data-line={`${which}.${id}`}
      onKeyDown={onKeyDown}
      className="mb-1 grid grid-cols-[1fr_1fr_1fr_1.25rem] items-start gap-x-1.5 narrow:mb-0 narrow:grid-cols-[minmax(0,1fr)_4.25rem_5.5rem_4.25rem_1.25rem] print:mb-1 print:grid-cols-3"
    >
      <span className="col-span-4 min-w-0 narrow:col-span-1 print:col-span-3">
        <TextCell {...cell('name', 'Line')} placeholder="name" />
      </span>
      <TextCell {...cell('limit', 'Limit')} placeholder={which === 'gain' ? 'ppm' : 'uV'} />
      <SelectCell {...cell('shape', 'Shape')} options={shapes} other={otherShape} />
      <SelectCell {...cell('when', 'When')} options={times} />
      {isReadOnly ? (
        <span />
      ) : (
        <button
          type="button"
          aria-label={`take ${which} line ${number} away`}
          onClick={remove}
          className="h-6 min-w-5 text-ink-2 hover:text-ink print:hidden"
        >
          <span aria-hidden="true">×</span>
        </button>
      )}
      {hasOtherK ? (
        <span className="col-span-full mb-1 grid grid-cols-[auto_6rem_1fr] items-center gap-x-2 pl-3 text-small text-ink-2">
          normal, limit is k standard deviations; k
          <TextCell {...cell('k', 'k')} placeholder="3.3" />
        </span>
      ) : null}
      {hasBias ? (
        <span className="col-span-full mb-1 grid grid-cols-[auto_1fr_auto_1fr] items-center gap-x-2 pl-3 text-small text-ink-2">
          bias
          <TextCell {...cell('nominal', 'Bias')} />
          {which === 'gain' ? 'pivot' : ''}
          {which === 'gain' ? <TextCell {...cell('pivot', 'Pivot')} placeholder="0 V" /> : <span />}
        </span>
      ) : null}
    </div>
  )
})
