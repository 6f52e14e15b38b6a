import { volts } from '../../../shared/design-words/words.ts'
import type { ResidualLine, SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { exact } from '../../ui/number-format.ts'

/** What of the design a residual line comes from, as typed there: "20 ppm", "1 LSB", "½ step". */
export function residualFrom(design: SizingDesign, line: ResidualLine): string {
  const way = line.path === 'neither' ? null : line.path
  const source = way === null ? undefined : design.adjusters[way]?.source
  switch (line.kind) {
    case 'quantising':
      return '½ step'
    case 'auxiliary-inl':
      return `${source?.inlLsb ?? 0} LSB`
    case 'auxiliary-drift':
      return `${source?.driftPpmPerK ?? 0} ppm/K, ${design.sizing?.temperatureSpanK ?? 0} K`
    case 'measurement':
      return 'U, k = 2'
    case 'instrument':
      return instrument(design)
    case 'converter-inl':
      return `${design.converter.inlLsb ?? 0} LSB`
    case 'not-trimmed':
      return 'one adjuster'
    case 'budget':
      return budget(design, line)
  }
}

function instrument({ measurement }: SizingDesign): string {
  const limits = measurement.instrument
  return limits ? `${limits.gainPpm} ppm, ${exact(limits.offsetV, 'V')}` : ''
}

function budget({ budget: lines }: SizingDesign, { name, path }: ResidualLine): string {
  if (path === 'gain') {
    const line = lines?.gain.find((one) => one.name === name)
    return line ? `${line.limitPpm} ppm` : ''
  }
  const line = lines?.offset.find((one) => one.name === name)
  return line ? volts(line.limitV) : ''
}
