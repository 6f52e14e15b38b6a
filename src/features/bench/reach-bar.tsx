import type { Trimmer } from '../../../shared/solver/adjuster.ts'
import { engineering, fixed } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'

type ReachBarProps = { trimmer: Trimmer; nodeV: number; used: number | null }

/** How much of the reach is used, and on which side of nominal. */
export function ReachBar({ trimmer, nodeV, used }: ReachBarProps) {
  const { reachUp, reachDown, nominalV, which } = trimmer
  const whole = reachUp + reachDown
  const share = (volts: number) => (whole === 0 ? 50 : ((volts - (nominalV - reachDown)) / whole) * 100)
  const [from, to] = nodeV < nominalV ? [share(nodeV), share(nominalV)] : [share(nominalV), share(nodeV)]
  const tick = (at: number) => <line x1={`${at}%`} x2={`${at}%`} y1={2} y2={12} stroke="var(--rule)" />
  return (
    <div className="mt-2 max-w-[22rem]">
      <svg width="100%" height={14} aria-hidden="true" className="block overflow-visible">
        <line x1="0%" x2="100%" y1={7} y2={7} stroke="var(--rule)" />
        {tick(0)}
        {tick(share(nominalV))}
        {tick(100)}
        <rect
          x={`${from}%`}
          width={`${Math.max(0, to - from)}%`}
          y={4}
          height={6}
          fill={which === 'gain' ? 'var(--copper)' : 'var(--tide)'}
        />
      </svg>
      <div className="mt-0.5 flex justify-between gap-2 text-small text-ink-2">
        <span>
          node <NumberText>{engineering(nodeV, 'V', 4, 'always')}</NumberText>
        </span>
        <span>{used === null ? 'no reach on this side' : `${fixed(used * 100, 1)} % of reach`}</span>
      </div>
    </div>
  )
}
