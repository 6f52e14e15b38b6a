import { adjusterRows } from './adjuster-rows.ts'
import { AskingHead, AskingRows } from './asking-rows.tsx'
import type { Said } from './form-context.ts'
import type { FormDoc } from './form-doc.ts'
import { Part } from './part.tsx'

export function AdjustersPart({ doc, said }: { doc: FormDoc; said: Said }) {
  return (
    <Part number={2} title="Adjusters" problem={said.problems.get('adjusters')}>
      <AskingHead />
      <AskingRows rows={adjusterRows(doc)} under={itself} said={said} />
      {said.remarks.has('adjusters') ? (
        <p className="mt-1 text-small text-ink-2">{said.remarks.get('adjusters')}</p>
      ) : null}
    </Part>
  )
}

const itself = (which: string) => which
