import type { ReactNode } from 'react'
import type { NetworkCandidate } from '../../../shared/solver/network-synthesis/request.ts'
import type { Network } from '../../../shared/solver/types.ts'
import { Button } from '../../ui/button.tsx'
import { fixed } from '../../ui/number-format.ts'
import { None, Td } from '../../ui/table.tsx'
import { nodeEnds, type ResistorFormat } from './resistor-format.ts'
import { networkName } from './resistor-words.ts'

type ResistorRowProps = {
  candidate: NetworkCandidate
  isShifted: boolean
  outputPerV: number
  format: ResistorFormat
  act?: ReactNode
  isOwn?: boolean
  /** It does not meet the request; nothing does. */
  isNearest?: boolean
  onUse?: ((network: Network) => void) | undefined
}

export function ResistorRow({
  candidate,
  isShifted,
  outputPerV,
  format,
  isOwn = false,
  ...rest
}: ResistorRowProps) {
  const { network, nodeLowV, nodeHighV, cornerLowV, cornerHighV, stepV, lostBits } = candidate
  return (
    <tr className={isOwn ? 'bg-shade' : ''}>
      <Td className="whitespace-nowrap">
        {rest.act ?? <Use network={network} onUse={rest.onUse} isNearest={rest.isNearest ?? false} />}
      </Td>
      <Num>{kiloohms('topOhm' in network ? network.topOhm : undefined, format.ohm)}</Num>
      {isShifted && (
        <Num>{kiloohms(network.kind === 'shifted' ? network.shiftOhm : undefined, format.ohm)}</Num>
      )}
      <Num>{kiloohms('bottomOhm' in network ? network.bottomOhm : undefined, format.ohm)}</Num>
      <Num>{nodeEnds(nodeLowV, nodeHighV)}</Num>
      <Num>{nodeEnds(cornerLowV, cornerHighV)}</Num>
      <Num>{fixed(lostBits, 2, 'always')}</Num>
      <Num>{fixed(stepV * outputPerV * format.stepPer, format.step)}</Num>
      <Num>{fixed(candidate.sourceOhm / 1e3, 2)}</Num>
      <Num>{fixed(candidate.dacCurrentA * 1e6, 0)}</Num>
    </tr>
  )
}

function Num({ children }: { children: ReactNode }) {
  return (
    <Td align="right" className="whitespace-nowrap">
      {children}
    </Td>
  )
}

type UseProps = { network: Network; isNearest: boolean; onUse: ((network: Network) => void) | undefined }

function Use({ network, isNearest, onUse }: UseProps) {
  const word = isNearest ? 'nearest' : 'candidate'
  if (!onUse) return <span className="text-ink-3">{word}</span>
  return (
    <>
      <Button look="quiet" aria-label={`use ${networkName(network)}`} onClick={() => onUse(network)}>
        use
      </Button>
      {isNearest ? <span className="text-ink-3"> nearest</span> : null}
    </>
  )
}

function kiloohms(ohm: number | undefined, decimals: number): ReactNode {
  return ohm === undefined || ohm === Number.POSITIVE_INFINITY ? <None /> : fixed(ohm / 1e3, decimals)
}
