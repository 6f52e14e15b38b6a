import type { RecordLine } from '../../../shared/contract/record.ts'
import { Button } from '../../ui/button.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Whole } from '../../ui/number-text.tsx'

type Props = {
  /** The first and the last record in view. */
  first: RecordLine | undefined
  last: RecordLine | undefined
  /** Left out at the end of the list. */
  onOlder: (() => void) | undefined
  onNewer: (() => void) | undefined
  isReading: boolean
}

/**
 * Where one is, without page numbers or a total, so that each page is equally quick. It stands before the list for the
 * keyboard, which need not walk all rows to it, and below it for the eye.
 */
export function HistoryFoot({ first, last, onOlder, onNewer, isReading }: Props) {
  return (
    <nav
      aria-label="Pages"
      data-sticks="foot"
      className="sticky bottom-0 z-10 order-last flex min-h-11 flex-wrap items-center gap-x-3 gap-y-1 border-t border-hair bg-paper py-2 text-ink-2 print:static print:border-0"
    >
      {first && last ? (
        <span>
          {'records '}
          <Whole value={first.number} />
          {' to '}
          <Whole value={last.number} />
        </span>
      ) : null}
      {onNewer ? (
        <Button onClick={onNewer}>
          Newer <KeyHint keys="[" />
        </Button>
      ) : null}
      {onOlder ? (
        <Button onClick={onOlder}>
          Older <KeyHint keys="]" />
        </Button>
      ) : null}
      {isReading ? <Loading>Reading records.</Loading> : null}
    </nav>
  )
}
