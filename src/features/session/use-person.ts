import { useSuspenseQuery } from '@tanstack/react-query'
import type { Me } from '../../../shared/contract/session.ts'
import { meOptions } from './queries.ts'

export type Person = Extract<Me['who'], { kind: 'person' }>

/** Who is signed in. Only within the frame, which has made sure that somebody is. */
export function usePerson(): Person {
  const { data } = useSuspenseQuery(meOptions)
  if (data.who.kind !== 'person') throw new Error('A token is no person and has no pages.')
  return data.who
}
