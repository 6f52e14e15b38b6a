import { createContext, type Dispatch, useContext } from 'react'
import type { FormAction } from './form-state.ts'

/** What every cell needs and never changes while typing, so that a key draws one cell again and not all. */
export type FormLinks = { dispatch: Dispatch<FormAction>; isReadOnly: boolean }

export const FormContext = createContext<FormLinks>({ dispatch: () => undefined, isReadOnly: true })
export const useFormLinks = (): FormLinks => useContext(FormContext)

/** What is said at a field: an error that takes the answer away, or a remark that does not. */
export type Said = { problems: ReadonlyMap<string, string>; remarks: ReadonlyMap<string, string> }
