import { type FormEvent, useState } from 'react'
import { scope } from '../../../shared/contract/primitives.ts'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { Checkbox, Select, TextInput } from '../../ui/input.tsx'
import { fieldMessage, Problem } from '../../ui/problem.tsx'
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
        <Field label="Station" error={message('station')} layout="row">
          <Select value={form.station} onChange={(event) => change({ station: event.target.value })}>
            <option value="">none</option>
            {stations.map((station) => (
              <option key={station.id} value={station.id}>
                {station.name}
              </option>
            ))}
          </Select>
        </Field>
        <Checks
          legend="Scopes"
          error={message('scopes')}
          all={scope.options}
          chosen={form.scopes}
          word={(one) => (
            <>
              <code className="font-mono text-small">{one}</code>
              <span className="text-ink-2"> {scopeWords[one]}</span>
            </>
          )}
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

function Checks<Value extends string>({
  legend,
  note,
  error,
  all,
  chosen,
  word,
  onChange,
}: {
  legend: string
  note?: string
  error?: string | undefined
  all: readonly Value[]
  chosen: readonly Value[]
  word: (value: Value) => React.ReactNode
  onChange: (chosen: Value[]) => void
}) {
  return (
    <fieldset className="grid grid-cols-1 gap-x-2 narrow:grid-cols-[7rem_1fr]">
      <legend className="float-left text-ink-2">{legend}</legend>
      <div className="flex flex-col narrow:col-start-2">
        {note ? <span className="min-h-6 text-small text-ink-3">{note}</span> : null}
        {all.map((value) => (
          <Checkbox
            key={value}
            checked={chosen.includes(value)}
            onChange={(event) =>
              onChange(all.filter((one) => (one === value ? event.target.checked : chosen.includes(one))))
            }
          >
            {word(value)}
          </Checkbox>
        ))}
        {error ? (
          <span role="alert" className="text-small text-bad">
            {error}
          </span>
        ) : null}
      </div>
    </fieldset>
  )
}
