import { memo, type ReactNode } from 'react'
import { type Options, Row, SelectCell, TextCell } from './cells.tsx'
import type { Said } from './form-context.ts'
import { Part } from './part.tsx'
import { methods, rules, sums } from './words.ts'

type Asking = { field: string; label: string; options?: Options; placeholder?: string }
export type Hints = Readonly<Record<string, ReactNode>>
type Props = { said: Said; hints: Hints }

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

export const SizingPart = memo(function SizingPart(props: Props) {
  return (
    <Part number={4} title="Sizing and target">
      <Rows asked={sizing} {...props} />
    </Part>
  )
})

/** A tolerance is asked for where a rule judges by it. */
export const MeasurementPart = memo(function MeasurementPart({
  isRuled,
  ...props
}: Props & { isRuled: boolean }) {
  return (
    <Part number={5} title="Measurement and decision">
      <Rows asked={isRuled ? measurement : measurement.slice(0, -1)} {...props} />
    </Part>
  )
})

function Rows({ asked, said: { problems, remarks }, hints }: Props & { asked: readonly Asking[] }) {
  return asked.map(({ field, label, options, placeholder }) => {
    const cell = {
      field,
      label,
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
