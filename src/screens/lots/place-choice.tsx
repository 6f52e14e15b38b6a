import type { Design } from '../../../shared/contract/design.ts'
import { Field } from '../../ui/field.tsx'
import { Select } from '../../ui/input.tsx'

type Props = {
  design: Design
  range: string
  channel: string | null
  onSearch: (change: Record<string, string | null>) => void
}

/** Which range and channel the plots are of; absent where the design has one of each. */
export function PlaceChoice({ design, range, channel, onSearch }: Props) {
  if (design.ranges.length < 2 && design.channels.length < 2) return null
  return (
    <div className="mt-3 flex flex-wrap gap-x-5 gap-y-1 print:hidden">
      {design.ranges.length > 1 ? (
        <Field label="range" layout="inline">
          <Select value={range} onChange={(event) => onSearch({ range: event.target.value })}>
            {design.ranges.map(({ id, label }) => (
              <option key={id} value={id}>
                {label ?? id}
              </option>
            ))}
          </Select>
        </Field>
      ) : null}
      {design.channels.length > 1 ? (
        <Field label="plots of channel" layout="inline">
          <Select value={channel ?? ''} onChange={(event) => onSearch({ channel: event.target.value })}>
            <option value="">all</option>
            {design.channels.map((name) => (
              <option key={name}>{name}</option>
            ))}
          </Select>
        </Field>
      ) : null}
    </div>
  )
}
