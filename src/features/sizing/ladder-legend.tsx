/** What the marks mean. */
export function LadderLegend() {
  return (
    <span className="mr-2 inline-flex flex-wrap items-center gap-x-4 gap-y-1">
      <span className="inline-flex items-center gap-1.5">
        <svg aria-hidden="true" width={24} height={8}>
          <rect y={1} width={24} height={6} fill="var(--ink)" />
        </svg>
        bit needed
      </span>
      <span className="inline-flex items-center gap-1.5">
        <svg aria-hidden="true" width={24} height={8}>
          <rect x={0.5} y={1.5} width={23} height={5} fill="none" stroke="var(--ink)" />
        </svg>
        bit to spare
      </span>
      <span className="inline-flex items-center gap-1.5">
        <svg aria-hidden="true" width={8} height={14}>
          <path d="M0 1H7V13H0" fill="none" stroke="var(--ink)" strokeWidth={1.75} />
        </svg>
        what budget (top) and target (bottom) demand
      </span>
      <span>No error bars: these are limits, not measurements.</span>
    </span>
  )
}
