import type { Instrument } from '../../../shared/contract/instruments.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { InstrumentForm } from './instrument-form.tsx'
import { useRetireInstrument } from './queries.ts'

type ActProps = { instrument: Instrument; onClose: () => void }

export function ChangeInstrument({ instrument, onClose }: ActProps) {
  return (
    <Dialog title={`Change ${instrument.id}`} onClose={onClose}>
      <p className="mb-3 text-body text-ink-2">Records keep what was true when they were made.</p>
      <InstrumentForm
        instrument={instrument}
        onDone={onClose}
        cancel={<Button onClick={onClose}>Cancel</Button>}
      />
    </Dialog>
  )
}

export function RetireInstrument({ instrument, onClose }: ActProps) {
  const retire = useRetireInstrument(instrument)
  return (
    <Dialog title={`Retire ${instrument.id}`} onClose={onClose}>
      <div className="space-y-3">
        <p>Nothing more is recorded with it. Its records stay. A retired instrument cannot be taken back.</p>
        <Problem error={retire.error} />
        <div className="flex gap-3">
          <Button
            look="primary"
            disabled={retire.isPending}
            onClick={() =>
              retire.mutate(undefined, {
                onSuccess: () => {
                  announce(`${instrument.id} is retired.`)
                  onClose()
                },
              })
            }
          >
            Retire {instrument.id}
          </Button>
          <Button data-first onClick={onClose}>
            Cancel
          </Button>
        </div>
      </div>
    </Dialog>
  )
}
