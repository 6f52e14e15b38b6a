import type { FitResult } from '../shared/solver/types.ts'
import { decimals, lsb, plusMinusPpm, plusMinusVolts, ppm, volts } from './quantities.ts'

/** A fit as the lines of a table for people: the value, and behind ± its expanded uncertainty. */
export function fitRows(fit: FitResult): [string, string][] {
  const { expandedUncertainty: u, linearity } = fit
  const rows: [string, string][] = [
    ['Fit', `${fit.method}, ${fit.n} points${dofText(fit)}`],
    [
      'Offset error',
      volts(fit.offsetErrorV) + (u ? ` ${plusMinusVolts(u.offsetV)} (k = ${decimals(u.kOffset, 2)})` : ''),
    ],
    [
      'Gain error',
      ppm(fit.gainErrorPpm) + (u ? ` ${plusMinusPpm(u.gainPpm)} (k = ${decimals(u.kGain, 2)})` : ''),
    ],
    ['Full-scale error', volts(fit.fullScaleErrorV)],
    ['Linearity', `${lsb(linearity.maxLsb)} at code ${linearity.atCode}`],
  ]
  for (const flag of fit.flags) rows.push(['Flag', flagText(flag)])
  if (fit.notes.length > 0) rows.push(['Notes', fit.notes.join(', ')])
  return rows
}

const why = {
  'known-u': 'known uncertainty',
  'two-points': 'two points',
  minimax: 'no uncertainty',
  terminal: 'end points',
}

function dofText({ dof, dofWhy }: FitResult): string {
  if (dof !== null) return `, ${decimals(dof, Number.isInteger(dof) ? 0 : 1)} degrees of freedom`
  return dofWhy === null ? '' : `, ${why[dofWhy]}`
}

function flagText({ flag, code, value, limit, unit }: FitResult['flags'][number]): string {
  const number = (n: number) => String(Number(n.toPrecision(3)))
  const size =
    value === null ? '' : `, ${number(value)}${limit === null ? '' : ` where ${number(limit)} is allowed`}`
  return `${flag}${code === null ? '' : ` at code ${code}`}${size}${unit && value !== null ? ` (${unit})` : ''}`
}
