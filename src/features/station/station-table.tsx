import { useState } from 'react'
import type { Station } from '../../../shared/contract/stations.ts'
import { Button } from '../../ui/button.tsx'
import { RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { RenameStation } from './rename-station.tsx'
import { RetireStation } from './retire-station.tsx'

export function StationTable({ stations }: { stations: readonly Station[] }) {
  const [open, setOpen] = useState<{ station: Station; act: 'rename' | 'retire' } | null>(null)
  const close = () => setOpen(null)
  return (
    <>
      <Table caption="Stations by name, retired ones last">
        <thead>
          <tr>
            <Th>station</Th>
            <Th unit="UTC">named</Th>
            <Th>state</Th>
            <Th>
              <span className="sr-only">acts</span>
            </Th>
          </tr>
        </thead>
        <tbody>
          {stations.map((station) => (
            <tr key={station.id}>
              <RowHead>{station.name}</RowHead>
              <Td className="text-ink-2">
                <TimeText at={station.createdAt} />
              </Td>
              <Td>
                {station.retiredAt ? (
                  <>
                    {'retired '}
                    <TimeText at={station.retiredAt} day />
                  </>
                ) : (
                  'in use'
                )}
              </Td>
              <Td align="right">
                {station.retiredAt ? null : (
                  <span className="inline-flex gap-3">
                    <Button
                      look="quiet"
                      aria-label={`Rename ${station.name}`}
                      onClick={() => setOpen({ station, act: 'rename' })}
                    >
                      rename
                    </Button>
                    <Button
                      look="quiet"
                      aria-label={`Retire ${station.name}`}
                      onClick={() => setOpen({ station, act: 'retire' })}
                    >
                      retire
                    </Button>
                  </span>
                )}
              </Td>
            </tr>
          ))}
        </tbody>
      </Table>
      {open?.act === 'rename' ? <RenameStation station={open.station} onClose={close} /> : null}
      {open?.act === 'retire' ? <RetireStation station={open.station} onClose={close} /> : null}
    </>
  )
}
