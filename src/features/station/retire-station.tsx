import type { Station } from '../../../shared/contract/stations.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useChangeStation } from './queries.ts'

export function RetireStation({ station, onClose }: { station: Station; onClose: () => void }) {
  const change = useChangeStation(station.id)
  const retire = () =>
    change.mutate(
      { retired: true },
      {
        onSuccess: () => {
          announce(`${station.name} is retired.`)
          onClose()
        },
      },
    )
  return (
    <Dialog title={`Retire ${station.name}`} onClose={onClose}>
      <div className="space-y-3">
        <p>
          Its tokens end at once and it can record nothing more. Its records stay. A retired station cannot be
          taken back.
        </p>
        <Problem error={change.error} />
        <div className="flex gap-3">
          <Button look="primary" disabled={change.isPending} onClick={retire}>
            Retire {station.name}
          </Button>
          <Button data-first onClick={onClose}>
            Cancel
          </Button>
        </div>
      </div>
    </Dialog>
  )
}
