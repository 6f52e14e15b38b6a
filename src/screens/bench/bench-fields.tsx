import { lotKey, serial } from '../../../shared/contract/primitives.ts'
import { limits } from '../../../shared/limits.ts'
import { AppliedField } from '../../features/bench/applied-field.tsx'
import { Choice, DesignFields, LineField } from '../../features/bench/head-fields.tsx'
import { rememberInstrument } from '../../features/bench/instrument.ts'
import { refusedAt } from '../../features/bench/use-recording.ts'
import type { BenchPageProps } from './bench-props.ts'
import { findStop } from './stops.ts'
import type { BenchActs } from './use-bench-acts.ts'
import type { BenchPageState } from './use-bench-page.ts'

type FieldsProps = BenchPageProps & { page: BenchPageState; acts: BenchActs }

/** The line under the head: what is measured, under what, with which codes loaded. */
export function BenchFields(props: FieldsProps) {
  const { page, change, designs, revision, range, channel } = props
  return (
    <div className="flex flex-wrap items-baseline gap-x-4 gap-y-1 py-1.5">
      <DesignFields designs={designs} revision={revision} range={range} channel={channel} change={change} />
      <UnitField {...props} />
      <LotField {...props} />
      {props.bench.trim ? (
        <AppliedField
          applied={page.applied}
          current={props.known.current}
          trimmers={props.bench.trim.trimmers}
          isFixed={page.isFixed}
          error={refusedAt(page.recording.refusal, '/applied')}
          onChange={(applied) => {
            page.recording.forgetRefusal()
            change({ applied })
          }}
        />
      ) : null}
      {page.chain.length > 0 ? (
        <Choice
          label="effects"
          value={page.effects}
          onChange={(value) => page.setEffects(value === 'design' ? 'design' : 'learned')}
          options={[
            ['learned', 'learned from the pass before'],
            ['design', 'as designed'],
          ]}
        />
      ) : null}
      <InstrumentField page={page} />
      <LineField
        label="temperature"
        chars={6}
        value={page.fields.temperature}
        placeholder="°C"
        error={page.temperatureTrouble ?? refusedAt(page.recording.refusal, '/conditions/temperatureC')}
        onCommit={(text) => page.setField('temperature', text)}
      />
      <LineField
        label="note"
        chars={28}
        value={page.fields.note}
        error={page.fields.note.length > limits.noteMax ? `At most ${limits.noteMax} characters.` : null}
        onCommit={(text) => page.setField('note', text)}
      />
    </div>
  )
}

/** Remembered on this computer: a bench has its meter. */
function InstrumentField({ page }: Pick<FieldsProps, 'page'>) {
  const { instrument, fields, recording } = page
  if (instrument.choices.length === 1) return null
  return (
    <Choice
      label="instrument"
      value={fields.instrument}
      options={instrument.choices}
      isFixed={page.isFixed}
      error={refusedAt(recording.refusal, '/conditions/instrument')}
      onChange={(id) => {
        recording.forgetRefusal()
        rememberInstrument(id)
        page.setField('instrument', id)
      }}
    />
  )
}

function UnitField({ page, acts, search }: FieldsProps) {
  const own = search.unit ?? ''
  return (
    <LineField
      label="unit"
      id="unit"
      chars={15}
      value={own}
      error={acts.unitTrouble ?? refusedAt(page.recording.refusal, '/unit')}
      check={(text) => (text === '' ? null : sentenceOf(serial.safeParse(text)))}
      onCommit={(text, byEnter) => {
        if (text !== own) acts.changeUnit(text)
        // The page of the new unit is drawn first.
        if (byEnter) setTimeout(() => findStop('cell-0')?.focus())
      }}
    />
  )
}

function LotField({ page, search, change }: FieldsProps) {
  return (
    <LineField
      label="lot"
      chars={5}
      value={search.lot ?? ''}
      error={refusedAt(page.recording.refusal, '/lot')}
      check={(text) => (text === '' ? null : sentenceOf(lotKey.safeParse(text)))}
      onCommit={(text) => {
        page.recording.forgetRefusal()
        change({ lot: text === '' ? null : text })
      }}
    />
  )
}

type Parsed = { success: boolean; error?: { issues: readonly { message: string }[] } | undefined }
const sentenceOf = (parsed: Parsed): string | null =>
  parsed.success ? null : (parsed.error?.issues[0]?.message ?? 'This cannot be taken.')
