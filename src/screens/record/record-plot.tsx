import type { CodesDocument } from '../../../shared/contract/codes.ts'
import type { Design } from '../../../shared/contract/design.ts'
import type { VerifyDocument } from '../../../shared/contract/verify.ts'
import { converterRange } from '../../../shared/solver/converter.ts'
import { AsLeftPlot } from '../../features/plot/as-left-plot.tsx'
import { ErrorPlot } from '../../features/plot/error-plot.tsx'
import type { PlotLine } from '../../features/plot/plot-data.ts'

type Range = ReturnType<typeof converterRange>

const plotRange = (range: Range) => ({
  lowV: range.lowV,
  highV: range.lowV + range.fsrV,
  lsbV: range.lsbV,
})

const plotLine = (line: { offsetErrorV: number; gainErrorPpm: number }, range: Range): PlotLine => ({
  offsetV: line.offsetErrorV,
  slope: line.gainErrorPpm / 1e6,
  pivotV: range.x0,
})

/** The stored result of a trim as Bench drew it, from the stored numbers alone. */
export function FoundPlot({ design, result }: { design: Design; result: CodesDocument }) {
  const range = converterRange(design, result.range)
  const flagged = new Set(result.fit.flags.map((flag) => flag.code))
  const { predicted } = result.trim
  return (
    <ErrorPlot
      title="Error as found"
      range={plotRange(range)}
      points={result.fit.residuals.map((point) => ({
        code: point.code,
        idealV: point.idealV,
        errorV: point.errorV,
        residualV: point.residualV,
        barV: null,
        flagged: flagged.has(point.code),
      }))}
      line={plotLine(result.fit, range)}
      predicted={predicted ? plotLine(predicted, range) : null}
      bars={null}
      method={result.fit.method}
    />
  )
}

export function LeftPlot({ design, result }: { design: Design; result: VerifyDocument }) {
  const range = converterRange(design, result.range)
  const residuals = result.fit?.residuals ?? []
  return (
    <AsLeftPlot
      title="Error as left, against tolerance"
      range={plotRange(range)}
      latest={{
        label: 'as left',
        points: result.points.map((point, i) => ({
          code: point.code,
          idealV: point.idealV,
          errorV: point.errorV,
          residualV: residuals[i]?.residualV ?? 0,
          barV: point.expandedUncertaintyV,
        })),
        line: result.fit ? plotLine(result.fit, range) : null,
      }}
      earlier={null}
      predicted={null}
      toleranceV={result.toleranceV}
      isGuarded={result.rule === 'guarded'}
      bars={
        result.points.some((point) => point.expandedUncertaintyV !== null)
          ? 'expanded uncertainty U of each point, as stored'
          : null
      }
    />
  )
}
