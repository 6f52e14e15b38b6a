import { type Kind, kinds, unitOf } from './units.ts'

/**
 * What a field asks for. `unit` is the unit of a bare number and of the value handed back; `also` are units of other
 * kinds that it takes (a target: LSB, or ppm, or V).
 */
export type Field = { label: string; unit: string; also?: readonly string[] }

/** A quantity as read: the value in `unit` (one of the field's), and the text as typed. */
export type Quantity = { value: number; unit: string; kind: Kind; typed: string }

export type FieldUnit = { symbol: string; kind: Kind; exponent: number }

/** The units of a field, its own first. The empty unit is a plain number. */
export function fieldUnits(field: Field): FieldUnit[] {
  return [field.unit, ...(field.also ?? [])].map((symbol) => {
    const unit = unitOf(symbol)
    return { symbol, kind: unit?.kind ?? 'number', exponent: unit?.exponent ?? 0 }
  })
}

/** "Limit takes ppm or %." */
export function takes(field: Field): string {
  const units = fieldUnits(field).map(({ kind }) => kinds[kind].takes)
  return `${field.label} takes ${units.join(', or ')}.`
}

/** Fields of points, shared by CSV, grid and command line. */
export const pointFields = {
  measured: { label: 'measured', unit: 'V' },
  readings: { label: 'readings', unit: 'V' },
  target: { label: 'target', unit: 'V' },
  uncertainty: { label: 'uncertainty', unit: 'V' },
  temperature: { label: 'temperature', unit: '°C' },
} as const satisfies Record<string, Field>
