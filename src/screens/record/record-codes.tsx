import { useQuery } from '@tanstack/react-query'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { CodesPlot } from '../../features/plot/codes-plot.tsx'
import { placeTrimsOptions } from '../../features/record/queries.ts'

/** How the codes of this place went over the years; nothing while there is but one trim. */
export default function RecordCodes({ record }: { record: TrimRecord }) {
  const trims = useQuery(placeTrimsOptions(record))
  const shown = (trims.data ?? []).filter((trim) => trim.gainCode !== null || trim.offsetCode !== null)
  if (shown.length < 2) return null
  return (
    <CodesPlot
      trims={shown.map((trim) => ({
        id: trim.id,
        at: trim.recordedAt,
        number: trim.number,
        gain: trim.gainCode,
        offset: trim.offsetCode,
        isThis: trim.id === record.id,
      }))}
    />
  )
}
