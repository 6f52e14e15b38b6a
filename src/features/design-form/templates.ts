import type { FormDoc } from './form-doc.ts'
import { newLine, newRange } from './form-state.ts'
import type { TemplateName } from './template-list.ts'

const gain = {
  'gain.effect': 'measured',
  'gain.slope': '2e-3 /V',
  'gain.offsetPerV': '0',
  'gain.known': '20 %',
  'gain.nominal': '0 V',
  'gain.limits': '-5 V to 5 V',
  'gain.nodeInput': '250 kohm',
  'gain.return': '0 V',
  'gain.network': 'divider',
  'gain.rs': '8.2k / 1.5k',
  'gain.bits': '12 bits',
  'gain.coding': 'offset-binary',
  'gain.span': '-2.5 V to 2.5 V',
  'gain.spanTolerance': '',
  'gain.inlDrift': '1 LSB, 5 ppm/K',
}
const offset = {
  'offset.effect': 'output-summing',
  'offset.feedback': '10 kohm',
  'offset.adjust': '1 Mohm',
  'offset.sign': 'inverting',
  'offset.known': '20 %',
  'offset.nominal': '0 V',
  'offset.limits': '-5 V to 5 V',
  'offset.nodeInput': '',
  'offset.return': '0 V',
  'offset.network': 'direct',
  'offset.bits': '12 bits',
  'offset.coding': 'offset-binary',
  'offset.span': '-2.5 V to 2.5 V',
  'offset.spanTolerance': '',
  'offset.inlDrift': '',
}
const plan = {
  bits: '',
  coding: 'straight-binary',
  inl: '1 LSB',
  channels: '1',
  hasBudget: 'yes',
  combine: 'worst-case',
  margin: '25 %',
  temperatureSpan: '20 K',
  target: '1 LSB',
  method: 'best-fit',
  points: '5 even',
  readings: '4',
  noise: '',
  meterResolution: '',
  plausible: '5 %',
  settle: '0.25 LSB',
  instrument: '1 ppm, 1 uV',
  rule: 'guarded',
  tolerance: '2 LSB',
}

/** A new design from a template, under a title that a person will change. */
export function fromTemplate(name: TemplateName, title: string): FormDoc {
  const hasOffset = name !== 'gain-only'
  const ofGain = { ...newLine(2), name: 'Gain error', limit: '300 ppm' }
  const ofOffset = { ...newLine(3), name: 'Amplifier offset', limit: '50 uV' }
  return {
    values: {
      ...plan,
      ...gain,
      ...(hasOffset ? offset : { 'offset.effect': 'none' }),
      title,
      ...(name === 'bipolar' ? { coding: 'twos-complement' } : {}),
    },
    lines: { gain: [ofGain], offset: hasOffset ? [ofOffset] : [] },
    ranges: [newRange(1, 'main')],
    nextId: 4,
  }
}
