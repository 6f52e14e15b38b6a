import { fieldsWith } from './form-doc.ts'
import { type FormAction, type FormState, formReducer } from './form-state.ts'

/** The form beside React: a key is heard by its own cell and by what answers it, and draws nothing else again. */
export type FormStore = {
  get: () => FormState
  dispatch: (action: FormAction) => void
  /** Hears of another document, or of what is tried; `isKey` where one field took a key. */
  subscribe: (hear: (isKey: boolean) => void) => () => void
  subscribeField: (field: string, hear: () => void) => () => void
}

export function createFormStore(first: FormState): FormStore {
  let state = first
  const hearers = new Set<(isKey: boolean) => void>()
  const cells = new Map<string, Set<() => void>>()
  return {
    get: () => state,
    dispatch: (action) => {
      const before = state
      state = formReducer(state, action)
      // That a field was left changes nothing that is shown.
      if (state.doc === before.doc && state.before === before.before) return
      const isKey = action.do === 'set'
      const concerned =
        action.do === 'set' ? fieldsWith(action.field).map((field) => cells.get(field)) : cells.values()
      for (const cell of concerned) for (const hear of cell ?? []) hear()
      for (const hear of hearers) hear(isKey)
    },
    subscribe: (hear) => {
      hearers.add(hear)
      return () => hearers.delete(hear)
    },
    subscribeField: (field, hear) => {
      const own = cells.get(field) ?? new Set()
      cells.set(field, own.add(hear))
      return () => {
        own.delete(hear)
        if (own.size === 0 && cells.get(field) === own) cells.delete(field)
      }
    },
  }
}
