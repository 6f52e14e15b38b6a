import type { Explanation } from '../../../shared/design-words/explanation.ts'
import { Button } from '../../ui/button.tsx'

/** Formula in words, inputs with where they are typed, source. */
export function ExplanationText(props: {
  label: string
  explanation: Explanation
  onField?: ((path: string) => void) | undefined
}) {
  const { label, explanation, onField } = props
  return (
    <div className="not-first:mt-2 not-first:border-t not-first:border-hair not-first:pt-2">
      <p className="font-semibold first-letter:uppercase">{label}</p>
      <p>{explanation.formula}</p>
      <dl className="mt-1 grid grid-cols-[auto_1fr] gap-x-3">
        {explanation.inputs.map((input) => (
          <div key={input.label} className="contents">
            <dt className="text-ink-2">{input.label}</dt>
            <dd>
              {onField && input.path !== null ? (
                <Button look="quiet" onClick={() => onField(input.path ?? '')}>
                  {input.text}
                </Button>
              ) : (
                input.text
              )}
            </dd>
          </div>
        ))}
      </dl>
      <p className="mt-1 text-small text-ink-3">{explanation.source}</p>
    </div>
  )
}
