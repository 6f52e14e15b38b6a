import { useQuery } from '@tanstack/react-query'
import { useMemo } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import { revisionOptions } from '../../features/design/queries.ts'
import { SmallLadder } from '../../features/sizing/small-ladder.tsx'
import { None } from '../../ui/table.tsx'
import { answerOf, picturesOf } from '../design-page/answer.ts'

/** The ladders of a revision's first range, small: one look over a list says which design has bits to spare. */
export default function DesignLadders({ designKey, number }: { designKey: string; number: number }) {
  const { data, error } = useQuery(revisionOptions(designKey, number))
  const ladders = useMemo(() => {
    if (!data) return null
    const answer = answerOf(data.document, data.document.ranges[0]?.id ?? '', null)
    return isOgeeError(answer) ? [] : picturesOf(answer).ladders
  }, [data])
  if (error || ladders?.length === 0) return <None />
  return (
    <span className="inline-flex items-end gap-2">
      {ladders?.map((ladder) => (
        <SmallLadder key={ladder.which} ladder={ladder} />
      ))}
    </span>
  )
}
