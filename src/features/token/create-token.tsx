import { type FormEvent, useState } from 'react'
import { type Scope, scope } from '../../../shared/contract/primitives.ts'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { Select, TextInput } from '../../ui/input.tsx'
import { fieldMessage, Problem } from '../../ui/problem.tsx'
import { Checks } from './checks.tsx'
import { useCreateToken } from './queries.ts'
import { emptyOrder, type OrderForm, orderOf, orderTrouble, scopeWords } from './token-order.ts'
import { TokenShownOnce } from './token-shown-once.tsx'

type Choice = { id: string; name: string }

export function CreateToken({
  stations,
  designs,
}: {
  stations: readonly Choice[]
  designs: readonly string[]
}) {
  const { form, change, message, create, submit, done } = useOrder()
  return (
    <>
      <form onSubmit={submit} noValidate className="max-w-[40rem] space-y-3">
        <Field
          label="Name"
          error={message('name')}
          layout="row"
          hint="What uses it: a bench, a script, a line."
        >
          <TextInput
            value={form.name}
            maxLength={limits.tokenNameMax}
            onChange={(event) => change({ name: event.target.value })}
          />
        </Field>
        <StationField
          error={message('station')}
          stations={stations}
          value={form.station}
          onChange={(station) => change({ station })}
        />
        <ScopeChecks
          error={message('scopes')}
          chosen={form.scopes}
          onChange={(scopes) => change({ scopes })}
        />
        <Field label="Days" error={message('days')} layout="row" hint="The token ends after that many days.">
          <TextInput
            inputMode="numeric"
            className="w-20!"
            value={form.days}
            onChange={(event) => change({ days: event.target.value })}
          />
        </Field>
        <Checks
          legend="Designs"
          note="none chosen: all designs"
          all={designs}
          chosen={form.designs}
          word={(key) => key}
          onChange={(chosen) => change({ designs: chosen })}
        />
        <Problem error={create.error} />
        <Button look="primary" type="submit" disabled={create.isPending}>
          Make the token
        </Button>
      </form>
      {create.data ? <TokenShownOnce token={create.data} onClose={done} /> : null}
    </>
  )
}

function ScopeChecks({
  error,
  chosen,
  onChange,
}: {
  error: string | undefined
  chosen: readonly Scope[]
  onChange: (scopes: Scope[]) => void
}) {
  return (
    <Checks
      legend="Scopes"
      error={error}
      all={scope.options}
      chosen={chosen}
      word={(one) => (
        <>
          <code className="font-mono text-small">{one}</code>
          <span className="text-ink-2"> {scopeWords[one]}</span>
        </>
      )}
      onChange={onChange}
    />
  )
}

function StationField({
  error,
  stations,
  value,
  onChange,
}: {
  error: string | undefined
  stations: readonly Choice[]
  value: string
  onChange: (id: string) => void
}) {
  return (
    <Field label="Station" error={error} layout="row">
      <Select value={value} onChange={(event) => onChange(event.target.value)}>
        <option value="">none</option>
        {stations.map((station) => (
          <option key={station.id} value={station.id}>
            {station.name}
          </option>
        ))}
      </Select>
    </Field>
  )
}

/** The form's state: troubles show once it was tried, and a made token clears it. */
function useOrder() {
  const [form, setForm] = useState<OrderForm>(emptyOrder)
  const [tried, setTried] = useState(false)
  const create = useCreateToken()
  const trouble = orderTrouble(form)
  const change = (part: Partial<OrderForm>) => setForm({ ...form, ...part })
  const message = (name: keyof typeof trouble) =>
    (tried ? trouble[name] : undefined) ?? fieldMessage(create.error, `/${name}`)
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (Object.keys(trouble).length === 0 && !create.isPending) create.mutate(orderOf(form))
  }
  const done = () => {
    create.reset()
    setForm(emptyOrder)
    setTried(false)
  }
  return { form, change, message, create, submit, done }
}
