import type { FormEvent } from 'react'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useExpect } from './queries.ts'
import { SerialsField, useSerials } from './serials-field.tsx'

/** Says which units belong to a lot, so that those that never came are seen. */
export default function ExpectDialog({ lot, onClose }: { lot: LotDetail; onClose: () => void }) {
  const serials = useSerials()
  const expect = useExpect({ key: lot.design, lot: lot.key })
  const submit = (event: FormEvent) => {
    event.preventDefault()
    if (serials.error !== null || serials.list.length === 0 || expect.isPending) return
    expect.mutate([...serials.list], {
      onSuccess: (changed) => {
        announce(`Lot ${changed.key} expects ${changed.expected ?? 0} units.`)
        onClose()
      },
    })
  }
  return (
    <Dialog title={`Units expected in lot ${lot.key}`} onClose={onClose}>
      <form onSubmit={submit} noValidate className="space-y-3">
        <p>
          {lot.expected === null ? 'No unit is expected yet. ' : `${lot.expected} are expected now. `}
          Serials are added, none is taken away: one that never comes is left out, with a reason, at sign-off.
        </p>
        <SerialsField serials={serials} label="Serials" />
        <Problem error={expect.error} />
        <div className="flex gap-3">
          <Button look="primary" type="submit" disabled={expect.isPending || serials.list.length === 0}>
            Add them
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </div>
      </form>
    </Dialog>
  )
}
