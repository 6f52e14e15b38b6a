import { explainSize } from '../../../shared/design-words/explain.ts'
import type { Explained } from './explained.ts'
import { ExplanationText } from './explanation-text.tsx'
import { Popover, type PopoverPlace } from './popover.tsx'

type ExplanationsProps = Explained & {
  place: PopoverPlace
  of: readonly { label: string; path: string }[]
  onField: ((path: string) => void) | undefined
}

/** The text of an explanation; it loads with the first number that is asked about. */
export default function Explanations({ place, design, result, of, onField }: ExplanationsProps) {
  const texts = of.map(({ label, path }) => {
    const explanation = explainSize(design, result, path)
    return explanation === null ? null : (
      <ExplanationText key={path} label={label} explanation={explanation} onField={onField} />
    )
  })
  return <Popover {...place}>{texts}</Popover>
}
