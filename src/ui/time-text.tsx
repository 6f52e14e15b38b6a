/** ISO date and 24 h time in UTC, which is named once in the head of a table or in the sentence. */
export function utcText(instant: string): string {
  const date = new Date(instant)
  return Number.isNaN(date.getTime()) ? instant : date.toISOString().slice(0, 19).replace('T', ' ')
}

export function utcDay(instant: string): string {
  return utcText(instant).slice(0, 10)
}

export function TimeText({ at, day = false }: { at: string; day?: boolean }) {
  return (
    <time dateTime={at} className="whitespace-nowrap">
      {day ? utcDay(at) : utcText(at)}
    </time>
  )
}
