import { useState } from 'react'
import type { Design } from '../../../shared/contract/design.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { parseCode } from '../../../shared/quantity/code.ts'
import { idealTable } from '../../../shared/solver/ideal-table.ts'
import { Button } from '../../ui/button.tsx'
import { copyText } from '../../ui/clipboard.ts'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { fixed } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'
import { Table, Td, Th } from '../../ui/table.tsx'

type IdealDialogProps = {
  design: Design
  rangeId: string
  decimals: number
  codes: readonly number[]
  onClose: () => void
}
type Line = { code: number; word: string; idealV: number }

/** What the display of the meter should read at chosen codes. */
export function IdealDialog({ design, rangeId, decimals, codes, onClose }: IdealDialogProps) {
  const [text, setText] = useState(codes.join(', '))
  const { lines, error } = linesOf(text, design, rangeId)
  const copied = ['code\tword\tideal_v', ...lines.map((l) => `${l.code}\t${l.word}\t${l.idealV}`)].join(
    '\r\n',
  )
  return (
    <Dialog title="Ideal values" onClose={onClose}>
      <Field label="codes" hint="Decimal or 0x, with commas between." error={error}>
        <TextInput autoFocus value={text} onChange={(event) => setText(event.target.value)} />
      </Field>
      <div className="mt-2 max-h-80 overflow-y-auto">
        <Table caption="Ideal values at chosen codes">
          <thead>
            <tr>
              <Th align="right">code</Th>
              <Th align="right">word</Th>
              <Th align="right" unit="V">
                meter reads
              </Th>
            </tr>
          </thead>
          <tbody>
            {lines.map((line, index) => (
              // biome-ignore lint/suspicious/noArrayIndexKey: a code may be asked for twice
              <tr key={index}>
                <Td align="right">
                  <Whole value={line.code} />
                </Td>
                <Td align="right" className="font-mono">
                  {line.word}
                </Td>
                <Td align="right">
                  <NumberText>{fixed(line.idealV, decimals + 1)}</NumberText>
                </Td>
              </tr>
            ))}
          </tbody>
        </Table>
      </div>
      <div className="mt-3 flex gap-2">
        <Button onClick={() => void copyText(copied, 'Copied the ideal values.')}>Copy</Button>
        <Button onClick={onClose}>Close</Button>
      </div>
    </Dialog>
  )
}

function linesOf(text: string, design: Design, rangeId: string): { lines: Line[]; error: string | null } {
  try {
    const codes = text
      .split(/[\s,;]+/)
      .filter((part) => part !== '')
      .map((part) => parseCode(part, 'code'))
    return { lines: idealTable(design, codes, { rangeId }), error: null }
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return { lines: [], error: error.message }
  }
}
