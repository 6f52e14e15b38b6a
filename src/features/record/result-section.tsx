import type { CodesDocument } from '../../../shared/contract/codes.ts'
import { CopyButton } from '../../ui/copy-button.tsx'
import { engineering, fixed } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'
import { Quantity } from '../../ui/quantity.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'

/** The fitted line: offset by tide, gain by copper, with the expanded uncertainty where there is one. */
export function LineTable({ fit }: { fit: CodesDocument['fit'] }) {
  const u = fit.expandedUncertainty
  return (
    <Table caption="Fitted line">
      <thead>
        <tr>
          <Th>Line, {fit.method.replace('-', ' ')}</Th>
          <Th align="right">value</Th>
          <Th align="right">{u ? `U, k = ${fixed(u.kOffset, 2)}` : 'U'}</Th>
          <Th>
            <span className="sr-only">where</span>
          </Th>
        </tr>
      </thead>
      <tbody>
        <tr>
          <RowHead className="font-semibold text-tide">offset error</RowHead>
          <Td align="right">
            <Quantity value={fit.offsetErrorV} unit="V" digits={4} sign="always" />
          </Td>
          <Td align="right">{u ? engineering(u.offsetV, 'V', 3) : <None />}</Td>
          <Td className="text-ink-2" />
        </tr>
        <tr>
          <RowHead className="font-semibold text-copper">gain error</RowHead>
          <Td align="right">
            <NumberText>{`${fixed(fit.gainErrorPpm, 2, 'always')} ppm`}</NumberText>
          </Td>
          <Td align="right">{u ? `${fixed(u.gainPpm, 2)} ppm` : <None />}</Td>
          <Td className="text-ink-2">
            {'full scale '}
            <Quantity value={fit.fullScaleErrorV} unit="V" digits={4} sign="always" />
          </Td>
        </tr>
        <tr>
          <RowHead className="font-semibold">linearity seen</RowHead>
          <Td align="right">{fixed(fit.linearity.maxLsb, 2)} LSB</Td>
          <Td align="right" />
          <Td className="text-ink-2">
            {'at code '}
            <Whole value={fit.linearity.atCode} />
          </Td>
        </tr>
      </tbody>
    </Table>
  )
}

const tones = { gain: 'text-copper', offset: 'text-tide' } as const

/** Codes with the words to send, or what was missing. */
export function CodesTable({ trim }: { trim: CodesDocument['trim'] }) {
  const adjusters = (['gain', 'offset'] as const).filter((which) => trim.exactNodeV[which] !== undefined)
  return (
    <Table caption="Codes">
      <thead>
        <tr>
          <Th>adjuster</Th>
          <Th align="right">code</Th>
          <Th>word</Th>
          <Th align="right">node</Th>
          <Th align="right" unit="of reach">
            %
          </Th>
          <Th>effect used</Th>
        </tr>
      </thead>
      <tbody>
        {adjusters.map((which) => (
          <CodeRow key={which} which={which} trim={trim} />
        ))}
      </tbody>
    </Table>
  )
}

function CodeRow({ which, trim }: { which: 'gain' | 'offset'; trim: CodesDocument['trim'] }) {
  const code = trim.codes?.[which]
  const word = trim.words?.[which]
  const nodeV = trim.nodeV?.[which] ?? trim.exactNodeV[which] ?? 0
  const reach = trim.reachUsed[which]
  const effect = trim.effects[which]
  return (
    <tr>
      <RowHead className={`font-semibold ${tones[which]}`}>{which}</RowHead>
      <Td align="right" className="text-head font-medium">
        {code === undefined ? <None /> : <NumberText>{String(code)}</NumberText>}
      </Td>
      <Td className="font-mono">
        {word === undefined ? <None /> : word}{' '}
        {code === undefined ? null : <CopyButton text={String(code)} what={`${which} code`} />}
      </Td>
      <Td align="right">
        <Quantity value={nodeV} unit="V" digits={4} sign="always" />
      </Td>
      <Td align="right">{reach === undefined || reach === null ? <None /> : fixed(reach * 100, 1)}</Td>
      <Td className="text-ink-2">
        {effect
          ? `${effect.source === 'learned' ? 'learned' : 'as designed'}, known to ${fixed(effect.tolerance * 100, 1)} %`
          : ''}
      </Td>
    </tr>
  )
}

/** What an adjuster out of reach wanted and what it has; nothing when all are in reach. */
export function Shortfall({ trim }: { trim: CodesDocument['trim'] }) {
  const { shortfall } = trim
  if (shortfall === null) return null
  return (
    <ul>
      {(['gain', 'offset'] as const).map((which) => {
        const short = shortfall[which]
        return short ? (
          <li key={which}>
            <span className={tones[which]}>{which}</span> wants{' '}
            <Quantity value={short.wantedV} unit="V" digits={4} sign="always" /> at the node; its{' '}
            {short.by === 'codes' ? 'codes end' : 'node ends'} at{' '}
            <Quantity value={short.limitV} unit="V" digits={4} sign="always" />.
          </li>
        ) : null
      })}
      <li>
        {'At best the worst error would remain '}
        <Quantity value={shortfall.remainingWorstV} unit="V" />.
      </li>
    </ul>
  )
}
