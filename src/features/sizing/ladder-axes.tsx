import type { ReactNode } from 'react'
import { engineering } from '../../../shared/quantity/format.ts'
import { numberText } from '../../ui/plot/plot-numbers.ts'
import type { LadderFrame } from './ladder-frame.ts'

/** The table and the sentences say it to a screen reader. */
const silent = { 'aria-hidden': true }
const text = { fontSize: 11, fontFamily: 'Fira Sans, sans-serif', dy: '0.35em' } as const

/** Output volts at the left, LSB and ppm at the right, hairlines between. Without a scale only the left axis. */
export function LadderAxes({ frame, hasScale }: { frame: LadderFrame; hasScale: boolean }) {
  const { left, right, top, bottom } = frame
  return (
    <g {...silent} fill="var(--ink-2)">
      <VoltTicks {...frame} />
      <line x1={left} x2={left} y1={top} y2={bottom} stroke="var(--rule)" />
      <Head x={left - 8} y={top - 26} anchor="end">
        output V
      </Head>
      {hasScale && (
        <>
          <line x1={right} x2={right} y1={top} y2={bottom} stroke="var(--rule)" />
          <LsbTicks {...frame} />
          <PpmTicks {...frame} />
        </>
      )}
    </g>
  )
}

function Head(props: { x: number; y: number; anchor: 'start' | 'end'; children: ReactNode }) {
  return (
    <text {...text} x={props.x} y={props.y} textAnchor={props.anchor}>
      {props.children}
    </text>
  )
}

function VoltTicks({ axis, left, right, y }: LadderFrame) {
  return axis.volts.map(({ value, major }) => (
    <g key={value} transform={`translate(0 ${y(value)})`}>
      <line x1={left} x2={right} stroke="var(--hair)" strokeOpacity={major ? 1 : 0.5} />
      <line x1={left - 4} x2={left} stroke="var(--rule)" />
      <text
        {...text}
        x={left - 8}
        textAnchor="end"
        fontWeight={major ? 500 : 400}
        {...(major ? { fill: 'var(--ink)' } : {})}
      >
        {engineering(value, 'V', { digits: 1 })}
      </text>
    </g>
  ))
}

/** Every second power of two, and a half: where the target of most designs lies. */
const isNamed = (exponent: number): boolean => exponent % 2 === 0 || exponent === -1

function LsbTicks({ axis, lsbV, right, top, y }: LadderFrame) {
  return (
    <>
      <Head x={right + 8} y={top - 26} anchor="start">
        LSB
      </Head>
      {axis.lsb
        .filter(({ exponent }) => isNamed(exponent))
        .map(({ exponent, value }) => (
          <g key={exponent} transform={`translate(${right} ${y(value * lsbV)})`}>
            <line x2={4} stroke="var(--rule)" />
            <text
              {...text}
              x={8}
              fontWeight={exponent === 0 ? 600 : 400}
              {...(exponent === 0 ? { fill: 'var(--ink)' } : {})}
            >
              {exponent < 0 ? `1/${numberText(1 / value, 0)}` : numberText(value, 0)}
            </text>
          </g>
        ))}
    </>
  )
}

function PpmTicks({ axis, right, end, top, y }: LadderFrame) {
  return (
    <>
      <Head x={end} y={top - 26} anchor="end">
        ppm FSR
      </Head>
      {axis.ppm.map(({ value, outputV }) => (
        <g key={value} transform={`translate(0 ${y(outputV)})`}>
          <line x1={right + 44} x2={right + 48} stroke="var(--rule)" />
          <text {...text} x={end} textAnchor="end">
            {value < 1 ? String(value) : numberText(value, 0)}
          </text>
        </g>
      ))}
    </>
  )
}
