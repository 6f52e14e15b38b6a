import { useQuery } from '@tanstack/react-query'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { Button } from '../../ui/button.tsx'
import { copyText } from '../../ui/clipboard.ts'
import { Problem } from '../../ui/problem.tsx'
import { Section } from '../../ui/section.tsx'
import { missingOptions } from './queries.ts'

/** Serials that are expected and not recorded; absent where nobody said what to expect. */
export function MissingList({ lot }: { lot: LotDetail }) {
  const { missing } = lot.counts
  const list = useQuery({
    ...missingOptions({ key: lot.design, lot: lot.key }, lot.etag),
    enabled: missing > 0,
    placeholderData: (before) => before,
  })
  if (lot.expected === null) return null
  const serials = list.data?.items ?? []
  return (
    <Section title="Expected, not recorded" side={`${missing} of ${lot.expected}`} className="mt-3">
      <Problem error={list.error} />
      {missing === 0 ? <p className="text-ink-2">Every expected unit is recorded.</p> : null}
      {serials.length > 0 && missing > 0 ? (
        <p className="max-h-24 overflow-y-auto [overflow-wrap:anywhere] print:max-h-none">
          {serials.join(', ')}
          {missing > serials.length ? `, and ${missing - serials.length} more` : ''}{' '}
          <Button
            look="quiet"
            className="!min-h-6 !text-small"
            onClick={() => void copyText(serials.join('\n'), 'Copied the serials.')}
          >
            Copy
          </Button>
        </p>
      ) : null}
    </Section>
  )
}
