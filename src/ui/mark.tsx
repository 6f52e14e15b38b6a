/** The mark: one stroke, the ogee. Always in ink. */
export function Mark({ className = '' }: { className?: string }) {
  return (
    <svg viewBox="0 0 16 16" className={className} aria-hidden="true">
      <path
        d="M1.5 13.25H4C9.5 13.25 6.5 2.75 12 2.75H14.5"
        fill="none"
        stroke="currentColor"
        strokeWidth="2.25"
      />
    </svg>
  )
}
