import { adjusterRows } from './adjuster-rows.ts'
import { AskingRows, askingColumns } from './asking-rows.tsx'
import type { Said } from './form-context.ts'
import { both, type FormDoc } from './form-doc.ts'
import { Part } from './part.tsx'

const tones = { gain: 'text-copper', offset: 'text-tide' } as const

export function AdjustersPart({ doc, said }: { doc: FormDoc; said: Said }) {
  return (
    <Part number={2} title="Adjusters" problem={said.problems.get('adjusters')}>
      <div className={`${askingColumns} text-small font-medium`} aria-hidden="true">
        <span />
        {both.map((which) => (
          <span key={which} className={`px-1 ${tones[which]}`}>
            {which}
          </span>
        ))}
      </div>
      <AskingRows rows={adjusterRows(doc)} under={itself} said={said} />
      {said.remarks.has('adjusters') ? (
        <p className="mt-1 text-small text-ink-2">{said.remarks.get('adjusters')}</p>
      ) : null}
    </Part>
  )
}

const itself = (which: string) => which
