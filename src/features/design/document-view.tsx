import type { Design } from '../../../shared/contract/design.ts'
import { engineering, exact, minus } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { Fact, Facts, Section } from '../../ui/section.tsx'
import { AdjusterTable } from './adjuster-table.tsx'
import { BudgetTable } from './budget-table.tsx'
import { codings, effectFacts, effectKind, limitInVolts, limitText, percent, span } from './words.ts'

/** Every field of a design document as text, in the order of the signal path. */
export function DocumentView({ design }: { design: Design }) {
  return (
    <div className="grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-[minmax(0,24rem)_minmax(0,1fr)]">
      <div className="space-y-3.5">
        <ChannelSection design={design} />
        <SizingSection design={design} />
        <MeasurementSection design={design} />
      </div>
      <div className="space-y-3.5">
        <Section title="Adjusters">
          <AdjusterTable adjusters={design.adjusters} />
        </Section>
        <Section title="Error budget">
          <BudgetTable budget={design.budget} />
        </Section>
      </div>
    </div>
  )
}

function ChannelSection({ design }: { design: Design }) {
  const { converter, channels, ranges } = design
  return (
    <Section title="Channel">
      <Facts>
        <Fact name="resolution">{converter.bits} bits</Fact>
        <Fact name="coding">{codings[converter.coding]}</Fact>
        <Fact name="INL limit">
          {converter.inlLsb === undefined ? 'not stated' : `${converter.inlLsb} LSB`}
        </Fact>
        <Fact name={channels.length === 1 ? 'channel' : 'channels'}>{channels.join(', ')}</Fact>
        {ranges.map((range) => (
          <RangeFacts key={range.id} range={range} bits={converter.bits} />
        ))}
      </Facts>
    </Section>
  )
}

function RangeFacts({ range, bits }: { range: Design['ranges'][number]; bits: number }) {
  const spanV = range.highV - range.lowV
  const overrides = (['gain', 'offset'] as const).flatMap((which) => {
    const effect = range.effects?.[which]
    return effect
      ? [
          `${which} effect here: ${effectKind(effect)}, ${effectFacts(effect)
            .map((f) => f.join(' '))
            .join(', ')}`,
        ]
      : []
  })
  return (
    <Fact name={`range ${range.id}`}>
      <NumberText>{span(range.lowV, range.highV)}</NumberText>
      {range.label && range.label.replace('-', minus) !== span(range.lowV, range.highV) ? (
        <span className="text-ink-2"> ({range.label})</span>
      ) : null}
      <span className="block text-ink-2">
        FSR {exact(spanV, 'V')}, LSB {engineering(spanV / 2 ** bits, 'V', 5)}; offset read at{' '}
        {range.offsetAt === 'zero-volts' ? '0 V' : 'the low end'}
      </span>
      {range.sharedWith ? (
        <span className="block">shares its codes with {range.sharedWith.join(', ')}</span>
      ) : null}
      {overrides.map((text) => (
        <span key={text} className="block">
          {text}
        </span>
      ))}
    </Fact>
  )
}

function SizingSection({ design }: { design: Design }) {
  const { sizing, target, ranges, converter } = design
  return (
    <Section title="Sizing and target">
      <Facts>
        <Fact name="reach from">
          {sizing ? (sizing.combine === 'rss' ? 'root sum square' : 'worst case') : 'not stated'}
        </Fact>
        <Fact name="margin">{sizing ? percent(sizing.margin) : 'not stated'}</Fact>
        <Fact name="temperature span">{sizing ? `${sizing.temperatureSpanK} K` : 'not stated'}</Fact>
        <Fact name="residual target">
          {limitText(target.residual)}
          {ranges.map((range) => (
            <span key={range.id} className="block text-ink-2">
              {engineering(limitInVolts(target.residual, range, converter.bits), 'V')} in range {range.id}
            </span>
          ))}
        </Fact>
      </Facts>
    </Section>
  )
}

function MeasurementSection({ design }: { design: Design }) {
  const { measurement, decision } = design
  const { instrument } = measurement
  return (
    <Section title="Measurement and decision">
      <Facts>
        <Fact name="line">{measurement.method.replace('-', ' ')}</Fact>
        <Fact name="codes">
          {measurement.points.map((code, i) => (
            // biome-ignore lint/suspicious/noArrayIndexKey: a stored list; the same code may stand twice
            <span key={i}>
              {i > 0 ? ', ' : ''}
              <NumberText>{String(code)}</NumberText>
            </span>
          ))}
        </Fact>
        <Fact name="readings">{measurement.readings ?? 'not stated'}</Fact>
        <Fact name="noise">
          {measurement.noiseV === undefined ? 'not stated' : exact(measurement.noiseV, 'V')}
        </Fact>
        <Fact name="resolution">
          {measurement.resolutionV === undefined ? 'not stated' : exact(measurement.resolutionV, 'V')}
        </Fact>
        <Fact name="instrument">
          {instrument ? `${instrument.gainPpm} ppm, ${exact(instrument.offsetV, 'V')}` : 'not stated'}
        </Fact>
        <Fact name="refuse beyond">{measurement.plausiblePercent} % of FSR</Fact>
        <Fact name="settled within">{measurement.settleLimitLsb} LSB</Fact>
        <Fact name="rule">{decision ? decision.rule : 'not stated'}</Fact>
        <Fact name="tolerance">{decision ? limitText(decision.tolerance) : 'not stated'}</Fact>
      </Facts>
    </Section>
  )
}
