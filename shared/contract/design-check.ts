import type * as z from 'zod'

/** What the check of a design reads. A structural type: the schema that calls the check cannot be named here. */
type Checked = {
  converter: { bits: number }
  channels: readonly string[]
  ranges: readonly {
    id: string
    lowV: number
    highV: number
    effects?: { gain?: unknown; offset?: unknown } | undefined
    sharedWith?: readonly string[] | undefined
  }[]
  adjusters: { gain?: CheckedAdjuster | undefined; offset?: CheckedAdjuster | undefined }
  budget?: { gain: readonly CheckedLine[]; offset: readonly CheckedLine[] } | undefined
  measurement: { points: readonly number[] }
}
type CheckedAdjuster = {
  source: { lowV: number; highV: number }
  node: { minV?: number | undefined; maxV?: number | undefined; nominalV: number }
}
type CheckedLine = { distribution: string; k?: number | undefined }
type Report = (path: (string | number)[], message: string) => void

/** Rules between fields of a design; each is reported at the field that a person would change. */
export function checkDesign(design: Checked, context: z.RefinementCtx): void {
  const report: Report = (path, message) => context.addIssue({ code: 'custom', path, message })
  checkNames(design, report)
  checkRanges(design, report)
  for (const which of ['gain', 'offset'] as const) {
    const adjuster = design.adjusters[which]
    if (adjuster) checkAdjuster(which, adjuster, report)
  }
  checkBudget(design, report)
  checkPlan(design, report)
}

function checkNames(design: Checked, report: Report): void {
  design.channels.forEach((name, i) => {
    if (design.channels.indexOf(name) < i) report(['channels', i], `Channel ${name} stands twice.`)
  })
  const ids = design.ranges.map((range) => range.id)
  ids.forEach((id, i) => {
    if (ids.indexOf(id) < i) report(['ranges', i, 'id'], `Range ${id} stands twice.`)
  })
}

function checkRanges(design: Checked, report: Report): void {
  const ids = design.ranges.map((range) => range.id)
  design.ranges.forEach((range, i) => {
    if (!(range.lowV < range.highV)) {
      report(
        ['ranges', i, 'highV'],
        `${range.highV} V is not above ${range.lowV} V. Channels that fall with code are not served.`,
      )
    }
    for (const which of ['gain', 'offset'] as const) {
      if (range.effects?.[which] !== undefined && !design.adjusters[which]) {
        report(
          ['ranges', i, 'effects', which],
          `The design has no ${which} adjuster whose effect could differ here.`,
        )
      }
    }
    range.sharedWith?.forEach((other, j) => {
      if (!ids.includes(other) || other === range.id) {
        report(['ranges', i, 'sharedWith', j], `There is no other range ${other}.`)
      }
    })
  })
}

function checkAdjuster(which: string, { source, node }: CheckedAdjuster, report: Report): void {
  if (source.lowV === source.highV) {
    report(
      ['adjusters', which, 'source', 'highV'],
      'The auxiliary DAC spans nothing: its two ends are the same voltage.',
    )
  }
  if (node.minV !== undefined && node.maxV !== undefined && !(node.minV < node.maxV)) {
    report(['adjusters', which, 'node', 'maxV'], `${node.maxV} V is not above minV, ${node.minV} V.`)
  }
  if (node.nominalV < (node.minV ?? node.nominalV) || node.nominalV > (node.maxV ?? node.nominalV)) {
    report(
      ['adjusters', which, 'node', 'nominalV'],
      'The nominal voltage lies outside the limits of the node.',
    )
  }
}

function checkBudget(design: Checked, report: Report): void {
  for (const which of ['gain', 'offset'] as const) {
    design.budget?.[which].forEach((line, i) => {
      if (line.distribution === 'normal' && line.k === undefined) {
        report(
          ['budget', which, i, 'k'],
          'A normal distribution needs k, the number of standard deviations of its limit.',
        )
      }
    })
  }
}

function checkPlan(design: Checked, report: Report): void {
  const top = 2 ** design.converter.bits - 1
  design.measurement.points.forEach((code, i) => {
    if (code > top)
      report(['measurement', 'points', i], `Code ${code} does not exist: the highest is ${top}.`)
  })
  if (new Set(design.measurement.points).size < 2) {
    report(['measurement', 'points'], 'Two different codes are the least that gives a line.')
  }
}
