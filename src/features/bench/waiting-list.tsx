import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { takeFromOutbox, useOutbox, type Waiting } from './outbox.ts'

type WaitingListProps = {
  person: string
  /** The draft on the page says it for itself. */
  except: string
  onOpen: (item: Waiting) => void
}

/** Records of other units that still wait on this computer, or that the server did not take. */
export function WaitingList({ person, except, onOpen }: WaitingListProps) {
  const items = useOutbox().filter((item) => item.draft !== except || item.refused !== null)
  const own = items.filter((item) => item.person === person)
  const others = items.length - own.length
  if (items.length === 0) return null
  return (
    <div className="mt-2 print:hidden">
      <Caution>
        {own.map((item) => (
          <div key={item.key} className="flex flex-wrap items-center gap-x-3">
            {item.refused ? (
              <>
                <p role="alert">
                  Unit {item.body.unit} was not recorded: {item.refused.message}
                </p>
                <Button look="quiet" onClick={() => onOpen(item)}>
                  Open it
                </Button>
                <Button look="quiet" onClick={() => takeFromOutbox(item.key)}>
                  Discard the notice
                </Button>
              </>
            ) : (
              <p>Unit {item.body.unit}: saved on this computer, not yet sent.</p>
            )}
          </div>
        ))}
        {others > 0 ? (
          <p>
            {others === 1 ? 'One record waits' : `${others} records wait`} on this computer for another person
            to sign in.
          </p>
        ) : null}
      </Caution>
    </div>
  )
}
