import { useRef, useState } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextArea } from '../../ui/input.tsx'
import { significant } from '../../ui/number-format.ts'
import { announce } from '../../ui/status.tsx'
import { measuredPlace, readMeasured } from './read-measured.ts'
import type { DesignPageState } from './use-design-page.ts'

/** Extents from units that were measured, in the place of the budget's initial lines: a file or a paste, and how to get rid of it. */
export default function MeasuredUnits({ page, onClose }: { page: DesignPageState; onClose: () => void }) {
  const { measured } = page.form
  const [pasted, setPasted] = useState('')
  const [refusal, setRefusal] = useState<string | null>(null)
  const input = useRef<HTMLInputElement>(null)
  const take = async (text: string, name: string) => {
    try {
      page.live.measure(await readMeasured(text, name))
      setRefusal(null)
      announce(`Extents are from the units in ${name}.`)
    } catch (error) {
      setRefusal(isOgeeError(error) ? error.message : `${name} could not be read.`)
    }
  }
  const takeFile = async (file: File | undefined) => {
    if (!file) return
    if (file.size > limits.benchCsvMaxBytes) return setRefusal(`${file.name} is over 10 MB.`)
    await take(await file.text(), file.name)
  }
  const leave = () => {
    page.live.measure(null)
    onClose()
  }
  if (measured !== null) return <InUse page={page} name={measured.name} onRemove={leave} />
  return (
    <div className="mt-1 space-y-1.5 border-t border-hair pt-1.5 print:hidden">
      <p className="text-small text-ink-2">
        Points of two units or more, measured with nothing loaded or with the codes named in the file. Mean
        and spread of their fits then stand in the place of the initial lines.
      </p>
      <Field
        label="Points CSV"
        error={refusal}
        hint="columns unit, code, measured, as Bench and ogee size take them"
      >
        <TextArea value={pasted} onChange={(event) => setPasted(event.target.value)} />
      </Field>
      <span className="flex flex-wrap gap-x-3 gap-y-1">
        <Button disabled={pasted.trim() === ''} onClick={() => void take(pasted, 'what was pasted')}>
          Use
        </Button>
        <Button look="quiet" onClick={() => input.current?.click()}>
          Choose a file
        </Button>
        <Button look="quiet" onClick={onClose}>
          Close
        </Button>
      </span>
      <input
        ref={input}
        type="file"
        accept=".csv,text/csv"
        aria-label="Points CSV of measured units"
        hidden
        onChange={(event) => {
          void takeFile(event.target.files?.[0])
          event.target.value = ''
        }}
      />
    </div>
  )
}

/** Factor and coverage as the solver has them by default: 99 % of all units with 95 % confidence. */
function InUse({ page, name, onRemove }: { page: DesignPageState; name: string; onRemove: () => void }) {
  const { said, answer } = page.answered
  const problem = said.problems.get(measuredPlace)
  const extents = answer?.size.extents
  const isShown = problem === undefined && extents?.from === 'measured-units'
  return (
    <div className="mt-1 border-t border-hair pt-1.5 text-small text-ink-2">
      {isShown && extents.toleranceFactor !== null ? (
        <p>
          {`From ${extents.units} measured units in ${name}: mean ± ${significant(extents.toleranceFactor, 4)} times their standard deviation, which holds 99 % of all units with 95 % confidence. Drift and noise lines of the budget still count; simulated yield still draws the initial lines.`}
        </p>
      ) : null}
      {problem ? (
        <p role="alert" className="text-bad">
          {problem}
        </p>
      ) : null}
      <p className="mt-0.5">
        This is tried here: it is not saved with the design, and a link does not carry it.
      </p>
      <Button look="quiet" className="text-small print:hidden" onClick={onRemove}>
        back to the budget's lines
      </Button>
    </div>
  )
}
