import { type FormEvent, useState } from 'react'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { fieldMessage, Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { nameTrouble } from './name-check.ts'
import { useCreateStation } from './queries.ts'

export function AddStation() {
  const [name, setName] = useState('')
  const [tried, setTried] = useState(false)
  const create = useCreateStation()
  const trouble = nameTrouble(name)
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (trouble !== null || create.isPending) return
    create.mutate(name, {
      onSuccess: () => {
        announce(`Station ${name} is named.`)
        setName('')
        setTried(false)
      },
    })
  }
  return (
    <form onSubmit={submit} noValidate className="max-w-[28rem] space-y-3">
      <Field
        label="Name of a new station"
        error={(tried ? trouble : null) ?? fieldMessage(create.error, '/name')}
      >
        <TextInput
          value={name}
          maxLength={limits.stationNameMax}
          onChange={(event) => setName(event.target.value)}
        />
      </Field>
      <Problem error={create.error} />
      <Button type="submit" disabled={create.isPending}>
        Add the station
      </Button>
    </form>
  )
}
