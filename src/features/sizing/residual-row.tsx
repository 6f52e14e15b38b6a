import type { ResidualLine } from '../../../shared/solver/sizing/types.ts'
import { fixed } from '../../ui/number-format.ts'
import { RowHead, Td } from '../../ui/table.tsx'
import { Explain } from './explain.tsx'
import type { Explained } from './explained.ts'
import { residualFrom } from './residual-from.ts'
import { columnLook, pathWords, type ResidualUnit, shareText } from './residual-units.ts'

const fills = { gain: 'fill-copper', offset: 'fill-tide', neither: 'fill-ink' } as const

type ResidualRowProps = {
  line: ResidualLine
  index: number
  explained: Explained
  perVolt: number
  unit: ResidualUnit
  onField?: ((path: string) => void) | undefined
}

export function ResidualRow({ line, index, explained, perVolt, unit, onField }: ResidualRowProps) {
  const at = `/residual/lines/${index}`
  return (
    <tr data-path={line.path}>
      <RowHead className="!font-normal">
        <Explain
          {...explained}
          name={line.name}
          of={[
            { label: `${line.name}, worst case`, path: `${at}/worstV` },
            { label: 'Standard uncertainty', path: `${at}/standardV` },
            { label: 'Share', path: `${at}/share` },
          ]}
          onField={onField}
          className="text-left"
        >
          {line.name}
        </Explain>
      </RowHead>
      <Td className="hidden text-ink-2 medium:table-cell print:table-cell">
        {residualFrom(explained.design, line)}
      </Td>
      <Td align="right" className={columnLook('V', unit)}>
        {fixed(line.worstV * perVolt, 2)}
      </Td>
      <Td align="right" className={columnLook('LSB', unit)}>
        {fixed(line.worstLsb, 2)}
      </Td>
      <Td align="right" className={columnLook('ppm', unit)}>
        {fixed(line.worstPpm, 2)}
      </Td>
      <Td>
        <ShareBar line={line} />
      </Td>
    </tr>
  )
}

/** The bar is as long as the share; the colour only repeats what the spoken word says. */
function ShareBar({ line }: { line: ResidualLine }) {
  return (
    <span className="flex items-center gap-1.5 whitespace-nowrap text-plot text-ink-2">
      <svg aria-hidden="true" height={8} className="shrink-0" width={`${Math.max(line.share * 84, 0.8)}%`}>
        <rect width="100%" height={8} className={fills[line.path]} />
      </svg>
      {shareText(line.share)}
      <span className="sr-only">, {pathWords[line.path]}</span>
    </span>
  )
}
