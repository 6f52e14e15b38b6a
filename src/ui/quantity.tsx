import { engineering, type Sign } from './number-format.ts'
import { NumberText } from './number-text.tsx'

/** Value and unit in engineering notation: three digits in sentences, more where asked. */
export function Quantity({
  value,
  unit,
  digits = 3,
  sign = 'auto',
}: {
  value: number
  unit: string
  digits?: number
  sign?: Sign
}) {
  return <NumberText>{engineering(value, unit, digits, sign)}</NumberText>
}
