import { type Asking, type AskingRow, rowLabel } from './adjuster-rows.ts'
import { SelectCell, TextCell } from './cells.tsx'
import type { Said } from './form-context.ts'
import { both, type Which } from './form-doc.ts'

const askingColumns = 'grid grid-cols-[6.75rem_minmax(0,1fr)_minmax(0,1fr)] items-start gap-x-2'

const tones = { gain: 'text-copper', offset: 'text-tide' } as const

/** Names the columns to the eye; each field names itself. */
export const AskingHead = () => (
  <div className={`${askingColumns} text-small font-medium`} aria-hidden="true">
    <span />
    {both.map((which) => (
      <span key={which} className={`px-1 ${tones[which]}`}>
        {which}
      </span>
    ))}
  </div>
)

/** Gain and offset side by side on the same labels, because they are the same questions. */
export function AskingRows({
  rows,
  under,
  said,
  where = '',
}: {
  rows: readonly AskingRow[]
  /** What the names of an adjuster's fields begin with. */
  under: (which: Which) => string
  said: Said
  /** Spoken after each label, where the same is asked in several places. */
  where?: string
}) {
  return rows.map((row) => (
    <div key={`${row.gain?.name}|${row.offset?.name}`} className={askingColumns}>
      <span
        className="pt-[4px] text-small leading-4 text-ink-2 print:pt-0 print:leading-[18px]"
        aria-hidden="true"
      >
        {rowLabel(row)}
      </span>
      {both.map((which) => {
        const asking = row[which]
        return asking ? (
          <AskingCell
            key={which}
            field={`${under(which)}.${asking.name}`}
            label={`${asking.label}, ${which}${where}`}
            asking={asking}
            said={said}
          />
        ) : (
          <span key={which} className="px-1 pt-[4px] text-small text-ink-3 print:pt-0 print:leading-[18px]">
            none
          </span>
        )
      })}
    </div>
  ))
}

function AskingCell({
  field,
  label,
  asking: { options, placeholder },
  said,
}: {
  field: string
  label: string
  asking: Asking
  said: Said
}) {
  const shared = { field, label, problem: said.problems.get(field), remark: said.remarks.get(field) }
  if (options) return <SelectCell {...shared} options={options} />
  return <TextCell {...shared} {...(placeholder === undefined ? {} : { placeholder })} />
}
