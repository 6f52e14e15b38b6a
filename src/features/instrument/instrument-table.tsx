import { useState } from 'react'
import { type CalibrationState, calibrationState } from '../../../shared/calibration.ts'
import type { Instrument } from '../../../shared/contract/instruments.ts'
import { Button } from '../../ui/button.tsx'
import { exact } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { ChangeInstrument, RetireInstrument } from './change-instrument.tsx'

type TableProps = { instruments: readonly Instrument[]; mayChange: boolean; atMs: number }

export function InstrumentTable({ instruments, mayChange, atMs }: TableProps) {
  const [open, setOpen] = useState<{ instrument: Instrument; act: 'change' | 'retire' } | null>(null)
  const close = () => setOpen(null)
  return (
    <>
      <Table caption="Instruments by name, retired ones last">
        <thead>
          <tr>
            <Th>instrument</Th>
            <Th>what it is</Th>
            <Th>serial</Th>
            <Th align="right" unit="ppm of reading">
              gain limit
            </Th>
            <Th align="right">offset limit</Th>
            <Th>calibrated</Th>
            <Th>due</Th>
            <Th>state</Th>
            {mayChange ? (
              <Th>
                <span className="sr-only">acts</span>
              </Th>
            ) : null}
          </tr>
        </thead>
        <tbody>
          {instruments.map((instrument) => (
            <tr key={instrument.id}>
              <RowHead className="whitespace-nowrap">{instrument.id}</RowHead>
              <Td>{instrument.title}</Td>
              <Td className="text-ink-2">{instrument.serial}</Td>
              <Td align="right">
                <NumberText>{exact(instrument.gainPpm, 'ppm').replace(' ppm', '')}</NumberText>
              </Td>
              <Td align="right">
                <NumberText>{exact(instrument.offsetV, 'V')}</NumberText>
              </Td>
              <Td className="whitespace-nowrap text-ink-2">{instrument.calibratedOn}</Td>
              <Td className="whitespace-nowrap">{instrument.dueOn}</Td>
              <Td className="whitespace-nowrap">
                <State instrument={instrument} atMs={atMs} />
              </Td>
              {mayChange ? (
                <Td align="right">
                  <Acts instrument={instrument} onOpen={(act) => setOpen({ instrument, act })} />
                </Td>
              ) : null}
            </tr>
          ))}
        </tbody>
      </Table>
      {open?.act === 'change' ? <ChangeInstrument instrument={open.instrument} onClose={close} /> : null}
      {open?.act === 'retire' ? <RetireInstrument instrument={open.instrument} onClose={close} /> : null}
    </>
  )
}

const words: Readonly<Record<CalibrationState, string>> = {
  good: 'in use',
  soon: 'due soon',
  overdue: 'overdue',
}

function State({ instrument, atMs }: { instrument: Instrument; atMs: number }) {
  if (instrument.retiredAt) {
    return (
      <span className="text-ink-2">
        retired <TimeText at={instrument.retiredAt} day />
      </span>
    )
  }
  const state = calibrationState(instrument.dueOn, atMs)
  if (state === 'good') return words.good
  return <Verdict verdict={state === 'overdue' ? 'fail' : 'conditional-pass'} word={words[state]} />
}

function Acts({
  instrument,
  onOpen,
}: {
  instrument: Instrument
  onOpen: (act: 'change' | 'retire') => void
}) {
  if (instrument.retiredAt) return null
  return (
    <span className="inline-flex gap-3">
      <Button look="quiet" aria-label={`Change ${instrument.id}`} onClick={() => onOpen('change')}>
        change
      </Button>
      <Button look="quiet" aria-label={`Retire ${instrument.id}`} onClick={() => onOpen('retire')}>
        retire
      </Button>
    </span>
  )
}
