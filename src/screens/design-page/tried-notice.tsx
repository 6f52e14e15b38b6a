import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { copyText } from '../../ui/clipboard.ts'
import type { DesignPageState } from './use-design-page.ts'

/** Says that the page shows something else than what is kept, and what can be done with it. */
export default function TriedNotice({ page: { dispatch, isEditable } }: { page: DesignPageState }) {
  return (
    <Caution tone="plain">
      <div role="status" className="flex flex-wrap items-center gap-x-3 gap-y-1">
        <p>This is tried and not saved.</p>
        {isEditable ? <Button onClick={() => dispatch({ do: 'keep-tried' })}>Keep it</Button> : null}
        <Button look="quiet" onClick={() => dispatch({ do: 'drop-tried' })}>
          Drop it
        </Button>
        <Button
          look="quiet"
          onClick={() => void copyText(window.location.href, 'Copied a link that carries what is tried.')}
        >
          Copy a link to it
        </Button>
      </div>
    </Caution>
  )
}
