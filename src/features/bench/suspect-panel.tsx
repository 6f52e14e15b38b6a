import { limits } from '../../../shared/limits.ts'
import type { FitResult } from '../../../shared/solver/types.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { suspectAdvice } from './flag-sentences.ts'

type SuspectPanelProps = {
  fit: FitResult
  reason: string
  onReason: (reason: string) => void
  /** Only a person with role engineer overrides; others record it marked. */
  mayOverride: boolean
  isBusy: boolean
  blocked: string | null
  error: string | null
  onOverride: () => void
  onRecordMarked: () => void
}

/** Before going on with a measurement in doubt: read again, or say why it counts all the same. */
export function SuspectPanel(props: SuspectPanelProps) {
  const { reason, mayOverride, isBusy, blocked } = props
  const isShort = reason.trim().length < limits.reasonMin
  return (
    <>
      <p className="text-text">
        <Verdict verdict="suspect" /> {suspectAdvice(props.fit.flags)}
      </p>
      {mayOverride ? (
        <div className="mt-3">
          <Field
            label="Reason for recording it all the same"
            hint="Kept in the record with your name. At least ten characters."
            error={props.error}
          >
            <TextInput
              value={reason}
              maxLength={limits.reasonMax}
              onChange={(event) => props.onReason(event.target.value)}
            />
          </Field>
          <Button
            className="mt-2"
            disabled={isShort || isBusy || blocked !== null}
            onClick={props.onOverride}
          >
            Record with override
          </Button>
        </div>
      ) : (
        <p className="mt-2 text-body">
          An engineer can override it with a reason. Recorded without one, it stays marked and its codes are
          not accepted.
        </p>
      )}
      <p className="mt-2">
        <Button look="quiet" disabled={isBusy || blocked !== null} onClick={props.onRecordMarked}>
          Record as suspect, codes not accepted
        </Button>
      </p>
    </>
  )
}
