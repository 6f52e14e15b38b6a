import { type Asking, adjusterRows, rowLabel } from './adjuster-rows.ts'
import { SelectCell, TextCell } from './cells.tsx'
import type { Said } from './form-context.ts'
import { both, type FormDoc, type Which } from './form-doc.ts'
import { Part } from './part.tsx'
import { effectKinds } from './words.ts'

const columns = 'grid grid-cols-[6.75rem_minmax(0,1fr)_minmax(0,1fr)] items-start gap-x-2'
const tones = { gain: 'text-copper', offset: 'text-tide' } as const
const kindOf: Asking = { name: 'effect', label: 'Effect', options: effectKinds }

/** Gain and offset side by side on the same labels, because they are the same questions. */
export function AdjustersPart({ doc, said }: { doc: FormDoc; said: Said }) {
  const rows = [{ gain: kindOf, offset: kindOf }, ...adjusterRows(doc)]
  return (
    <Part number={2} title="Adjusters" problem={said.problems.get('adjusters')}>
      <div className={`${columns} text-small font-medium`} aria-hidden="true">
        <span />
        {both.map((which) => (
          <span key={which} className={`px-1 ${tones[which]}`}>
            {which}
          </span>
        ))}
      </div>
      {rows.map((row) => {
        const label = rowLabel(row)
        return (
          <div key={`${row.gain?.name}|${row.offset?.name}`} className={columns}>
            <span
              className="pt-[4px] text-small leading-4 text-ink-2 print:pt-0 print:leading-[18px]"
              aria-hidden="true"
            >
              {label}
            </span>
            {both.map((which) => {
              const asking = row[which]
              return asking ? (
                <AdjusterCell key={which} which={which} asking={asking} said={said} />
              ) : (
                <span
                  key={which}
                  className="px-1 pt-[4px] text-small text-ink-3 print:pt-0 print:leading-[18px]"
                >
                  none
                </span>
              )
            })}
          </div>
        )
      })}
      {said.remarks.has('adjusters') ? (
        <p className="mt-1 text-small text-ink-2">{said.remarks.get('adjusters')}</p>
      ) : null}
    </Part>
  )
}

function AdjusterCell({
  which,
  asking: { name, label, options, placeholder },
  said,
}: {
  which: Which
  asking: Asking
  said: Said
}) {
  const field = `${which}.${name}`
  const shared = {
    field,
    label: `${label}, ${which}`,
    problem: said.problems.get(field),
    remark: said.remarks.get(field),
  }
  if (options) return <SelectCell {...shared} options={options} />
  return <TextCell {...shared} {...(placeholder === undefined ? {} : { placeholder })} />
}
