import { createContext, useCallback, useContext, useSyncExternalStore } from 'react'
import { textOf } from './form-doc.ts'
import type { FormStore } from './form-store.ts'

/** What every cell needs and never changes while typing, so that a key draws one cell again and not all. */
export type FormLinks = { store: FormStore; isReadOnly: boolean }

export const FormContext = createContext<FormLinks | null>(null)

export function useFormLinks(): FormLinks {
  const links = useContext(FormContext)
  if (links === null) throw new Error('a part of the form stands outside a form')
  return links
}

/** The text of one field, drawn again with each key in it and with no other. */
export function useFieldText(field: string): string {
  const { store } = useFormLinks()
  const subscribe = useCallback((hear: () => void) => store.subscribeField(field, hear), [store, field])
  return useSyncExternalStore(subscribe, () => textOf(store.get().doc, field))
}

/** What is said at a field: an error that takes the answer away, or a remark that does not. */
export type Said = { problems: ReadonlyMap<string, string>; remarks: ReadonlyMap<string, string> }
