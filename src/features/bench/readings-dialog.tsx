import { useState } from 'react'
import { mean } from '../../../shared/solver/points.ts'
import { pooledReadings } from '../../../shared/solver/readings.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextArea } from '../../ui/input.tsx'
import { engineering } from '../../ui/number-format.ts'
import { readMeasured } from './read-cells.ts'

type ReadingsDialogProps = { row: number; text: string; onDone: (text: string) => void; onClose: () => void }

/** Several readings of one point, one a line, with their mean, count and scatter as they are typed. */
export function ReadingsDialog({ row, text, onDone, onClose }: ReadingsDialogProps) {
  const [lines, setLines] = useState(() => parts(text).join('\n'))
  const joined = parts(lines).join('; ')
  const read = readMeasured(`${joined};`, () => 'pending')
  const readings = read.is === 'value' && 'readings' in read.value ? read.value.readings : []
  const { variance, dof } = pooledReadings([readings])
  const scatter = dof > 0 ? `, s = ${engineering(Math.sqrt(variance), 'V')}` : ''
  const hint =
    readings.length > 0
      ? `${readings.length === 1 ? '1 reading' : `${readings.length} readings`}, mean ${mean(readings)} V${scatter}`
      : 'One reading a line, in the order they were read. Units are taken.'
  return (
    <Dialog title={`Readings of row ${row + 1}`} onClose={onClose}>
      <Field label="readings, V" hint={hint} error={read.is === 'wrong' ? read.why : null}>
        <TextArea rows={8} autoFocus value={lines} onChange={(event) => setLines(event.target.value)} />
      </Field>
      <div className="mt-3 flex gap-2">
        <Button look="primary" disabled={read.is === 'wrong'} onClick={() => onDone(joined)}>
          Take them
        </Button>
        <Button onClick={onClose}>Leave as it was</Button>
      </div>
    </Dialog>
  )
}

const parts = (text: string): string[] =>
  text
    .split(/[;\r\n]+/)
    .map((part) => part.trim())
    .filter((part) => part !== '')
