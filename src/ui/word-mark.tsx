import { Mark } from './mark.tsx'

/** Mark and name on the head line of pages outside the frame. */
export function WordMark() {
  return (
    <p className="flex items-center gap-3 border-b-2 border-ink pb-2.5 text-[1.75rem] leading-8 font-medium">
      <Mark className="size-8" />
      Ogee
    </p>
  )
}
