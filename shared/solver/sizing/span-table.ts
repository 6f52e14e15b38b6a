import { prepareTrimmer } from '../adjuster.ts'
import type { Which } from '../types.ts'
import { type Judged, judgeAvailable } from './available.ts'
import { prepare, type SizeOptions, sizeAdjusters } from './size.ts'
import type { SizeVerdict, SizingDesign } from './types.ts'

export type SpanColumn = {
  lowV: number
  highV: number
  /** With the design's own resolution: reach hardly depends on it. */
  reachMargin: number | null
  reachSpareBits: number | null
  own: boolean
}
export type SpanCell = { verdict: SizeVerdict; stepMargin: number; stepSpareBits: number; own: boolean }
export type SpanTable = {
  which: Which
  columns: SpanColumn[]
  rows: { bits: number; cells: SpanCell[] }[]
}

export type SpanTableOptions = SizeOptions & {
  bits?: readonly number[] | undefined
  spans?: readonly { lowV: number; highV: number }[] | undefined
}

const usualBits = [8, 10, 12, 14, 16]
const usualHalves = [0.5, 1, 2.5, 5, 10]

/**
 * Resolutions × spans of an auxiliary DAC through the design's network: where both reach and step hold.
 * @param which adjuster; absent from the design gives null
 * @param options resolutions and spans to try; the usual ones and the design's own when left out
 * @throws as `sizeDesign`
 * Source: solver.md section 6.
 * @example resolutionSpanTable(unipolar18, 'gain')?.rows[2]?.cells[2]?.verdict // 'covers'
 */
export function resolutionSpanTable(
  design: SizingDesign,
  which: Which,
  options: SpanTableOptions = {},
): SpanTable | null {
  const adjuster = design.adjusters[which]
  if (adjuster === undefined) return null
  const { source, effect, effectTolerance, node, network } = adjuster
  const { ranges, converter, target, measurement } = design
  const spans = withOwn(options.spans ?? usualSpans(source.lowV, source.highV), source)
  const resolutions = [...new Set([...(options.bits ?? usualBits), source.bits])].sort((a, b) => a - b)
  const isOwn = (span: Ends) => span.lowV === source.lowV && span.highV === source.highV
  // What is needed does not depend on the part: the budget is summed once and each cell only compares.
  const prepared = prepare(design, options)
  const sized = sizeAdjusters(prepared).find(({ trimmer }) => trimmer.which === which)!
  const { design: _, ...rest } = prepared.channel
  const judge = (bits: number, { lowV, highV }: Ends): Judged => {
    const part = { bits, lowV, highV, coding: source.coding, spanTolerance: source.spanTolerance }
    const changed = { source: part, effect, effectTolerance, node, network }
    const other = { adjusters: { [which]: changed }, ranges, converter, target, measurement }
    const trimmer = prepareTrimmer({ design: other, ...rest }, which)!
    return judgeAvailable(trimmer, sized.reach, sized.size.requiredStepV, sized.outputPerV)
  }
  return {
    which,
    columns: spans.map((span) => {
      const { reachMargin, reachSpareBits } = judge(source.bits, span)
      return { ...span, reachMargin, reachSpareBits, own: isOwn(span) }
    }),
    rows: resolutions.map((bits) => ({
      bits,
      cells: spans.map((span) => {
        const { verdict, stepMargin, stepSpareBits } = judge(bits, span)
        return { verdict, stepMargin, stepSpareBits, own: bits === source.bits && isOwn(span) }
      }),
    })),
  }
}

type Ends = { lowV: number; highV: number }

/** Symmetric parts are tried symmetric, those from 0 V from 0 V, falling ones falling, others about their own middle. */
function usualSpans(lowV: number, highV: number): Ends[] {
  if (lowV === -highV) {
    const sign = highV > 0 ? 1 : -1
    return usualHalves.map((half) => ({ lowV: -sign * half, highV: sign * half }))
  }
  if (lowV === 0 || highV === 0) {
    const end = highV === 0 ? lowV : highV
    return usualHalves.map((size) => {
      const v = end > 0 ? size : -size
      return highV === 0 ? { lowV: v, highV: 0 } : { lowV: 0, highV: v }
    })
  }
  const middle = (lowV + highV) / 2
  const half = (highV - lowV) / 2
  return [0.25, 0.5, 1, 2, 4].map((factor) =>
    factor === 1 ? { lowV, highV } : { lowV: middle - factor * half, highV: middle + factor * half },
  )
}

/** The design's own span among those to try, in order of size. */
function withOwn(spans: readonly Ends[], own: Ends): Ends[] {
  const all = spans.some(({ lowV, highV }) => lowV === own.lowV && highV === own.highV)
    ? [...spans]
    : [...spans, { lowV: own.lowV, highV: own.highV }]
  return all.sort((a, b) => Math.abs(a.highV - a.lowV) - Math.abs(b.highV - b.lowV))
}
