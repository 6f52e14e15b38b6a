import type { CodesDocument } from '../../../shared/contract/codes.ts'
import { Caution } from '../../ui/caution.tsx'
import { fixed, significant } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'

type Flag = CodesDocument['fit']['flags'][number]

/** Why a record is suspect: each flag with its value and its limit. */
export function FlagSentences({ flags }: { flags: readonly Flag[] }) {
  if (flags.length === 0) return null
  return (
    <Caution tone="suspect">
      <ul>
        {flags.map((flag) => (
          <li key={`${flag.flag} ${flag.code ?? ''}`}>
            <strong className="font-semibold">{flag.flag.replace('-', ' ')}</strong>
            {flag.code === null ? null : (
              <>
                {' at code '}
                <Whole value={flag.code} />
              </>
            )}
            {flag.value === null ? null : (
              <>
                {': '}
                <NumberText>{number(flag.value)}</NumberText>
                {flag.unit ? ` ${flag.unit}` : ''}
                {flag.limit === null
                  ? ''
                  : ` against a limit of ${number(flag.limit)}${flag.unit ? ` ${flag.unit}` : ''}`}
              </>
            )}
            .
          </li>
        ))}
      </ul>
    </Caution>
  )
}

function number(value: number): string {
  const text = significant(Math.abs(value), 3)
  return value < 0 ? fixed(value, (text.split('.')[1] ?? '').length) : text
}
