import { type FormEvent, useState } from 'react'
import type { DesignLine } from '../../../shared/contract/designs.ts'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { lotKey } from '../../../shared/contract/primitives.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { Select, TextInput } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useOpenLot } from './queries.ts'
import { SerialsField, useSerials } from './serials-field.tsx'

export default function OpenLotDialog({
  designs,
  onOpened,
  onClose,
}: {
  /** Those with a released revision. */
  designs: readonly DesignLine[]
  onOpened: (lot: LotDetail) => void
  onClose: () => void
}) {
  const [key, setKey] = useState('')
  const [chosen, setDesign] = useState('')
  const [tried, setTried] = useState(false)
  const serials = useSerials()
  const open = useOpenLot()
  const design = chosen === '' ? (designs[0]?.key ?? '') : chosen
  const wrong = key === '' ? 'The key is missing.' : lotKey.safeParse(key).error?.issues[0]?.message
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (wrong !== undefined || serials.error !== null || open.isPending || design === '') return
    const expected = serials.list.length > 0 ? { expected: [...serials.list] } : {}
    open.mutate(
      { design, key, ...expected },
      {
        onSuccess: (lot) => {
          announce(`Lot ${lot.key} is open.`)
          onOpened(lot)
        },
      },
    )
  }
  return (
    <Dialog title="Open a lot" onClose={onClose}>
      <form onSubmit={submit} noValidate className="space-y-3">
        <p>A lot is of one released revision and keeps it, also when another one is released later.</p>
        <Field label="Lot" error={tried ? wrong : undefined} hint="Unique for the design, such as 2417.">
          <TextInput data-first value={key} onChange={(event) => setKey(event.target.value.trim())} />
        </Field>
        <Field label="Design" hint="Its highest released revision is taken.">
          <Select value={design} onChange={(event) => setDesign(event.target.value)}>
            {designs.map((one) => (
              <option key={one.key} value={one.key}>
                {`${one.key}, revision ${one.released ?? ''}: ${one.title}`}
              </option>
            ))}
          </Select>
        </Field>
        <SerialsField serials={serials} label="Units expected" />
        <Problem error={open.error} />
        <div className="flex gap-3">
          <Button look="primary" type="submit" disabled={open.isPending}>
            Open the lot
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </div>
      </form>
    </Dialog>
  )
}
