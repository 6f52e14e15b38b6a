import { type FormEvent, useState } from 'react'
import type { Station } from '../../../shared/contract/stations.ts'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { fieldMessage, Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { nameTrouble } from './name-check.ts'
import { useChangeStation } from './queries.ts'

export function RenameStation({ station, onClose }: { station: Station; onClose: () => void }) {
  const [name, setName] = useState(station.name)
  const [tried, setTried] = useState(false)
  const change = useChangeStation(station.id)
  const trouble = nameTrouble(name)
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (trouble !== null || change.isPending) return
    change.mutate(
      { name },
      {
        onSuccess: () => {
          announce(`Renamed to ${name}.`)
          onClose()
        },
      },
    )
  }
  return (
    <Dialog title={`Rename ${station.name}`} onClose={onClose}>
      <form onSubmit={submit} noValidate className="space-y-3">
        <Field
          label="Name"
          error={(tried ? trouble : null) ?? fieldMessage(change.error, '/name')}
          hint="Records keep the name that the station had when they were made."
        >
          <TextInput
            data-first
            value={name}
            maxLength={limits.stationNameMax}
            onChange={(event) => setName(event.target.value)}
          />
        </Field>
        <Problem error={change.error} />
        <div className="flex gap-3">
          <Button look="primary" type="submit" disabled={change.isPending}>
            Rename
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </div>
      </form>
    </Dialog>
  )
}
