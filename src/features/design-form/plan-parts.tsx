import type { ReactNode } from 'react'
import { type Options, Row, SelectCell, TextCell } from './cells.tsx'
import type { Said } from './form-context.ts'
import type { FormDoc } from './form-doc.ts'
import { Part } from './part.tsx'
import { methods, rules, sums } from './words.ts'

type Asking = { field: string; label: string; options?: Options; placeholder?: string }
export type Hints = Readonly<Record<string, ReactNode>>
type Props = { doc: FormDoc; said: Said; hints: Hints }

const sizing: readonly Asking[] = [
  { field: 'combine', label: 'Reach from', options: sums },
  { field: 'margin', label: 'Margin', placeholder: '25 %' },
  { field: 'temperatureSpan', label: 'Temperature span', placeholder: '0 K' },
  { field: 'target', label: 'Residual target', placeholder: '0.5 LSB' },
]
const measurement: readonly Asking[] = [
  { field: 'method', label: 'Line', options: methods },
  { field: 'points', label: 'Codes', placeholder: '5 even' },
  { field: 'readings', label: 'Readings', placeholder: '1' },
  { field: 'noise', label: 'Noise' },
  { field: 'meterResolution', label: 'Meter step' },
  { field: 'instrument', label: 'Instrument' },
  { field: 'plausible', label: 'Refuse beyond', placeholder: '5 %' },
  { field: 'settle', label: 'Settled within', placeholder: '0.25 LSB' },
  { field: 'rule', label: 'Rule', options: rules },
  { field: 'tolerance', label: 'Tolerance', placeholder: '1 LSB' },
]

export const SizingPart = (props: Props) => (
  <Part number={4} title="Sizing and target">
    <Rows asked={sizing} {...props} />
  </Part>
)

export function MeasurementPart(props: Props) {
  const ruled = (props.doc.values.rule ?? '') !== ''
  return (
    <Part number={5} title="Measurement and decision">
      <Rows asked={ruled ? measurement : measurement.slice(0, -1)} {...props} />
    </Part>
  )
}

function Rows({ asked, doc, said: { problems, remarks }, hints }: Props & { asked: readonly Asking[] }) {
  return asked.map(({ field, label, options, placeholder }) => {
    const cell = {
      field,
      label,
      text: doc.values[field] ?? '',
      problem: problems.get(field),
      remark: remarks.get(field),
    }
    return (
      <Row key={field} label={label} hint={hints[field]}>
        {options ? (
          <SelectCell {...cell} options={options} />
        ) : (
          <TextCell {...cell} {...(placeholder === undefined ? {} : { placeholder })} />
        )}
      </Row>
    )
  })
}
