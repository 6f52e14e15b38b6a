import { type DragEvent, useEffect, useRef } from 'react'

/** A block pasted while no field has the focus goes into the grid too: the hand is on Ctrl V before it is on a cell. */
export function useLoosePaste(take: (text: string) => void): void {
  const latest = useRef(take)
  latest.current = take
  useEffect(() => {
    const onPaste = (event: ClipboardEvent) => {
      const target = event.target instanceof HTMLElement ? event.target : null
      const text = event.clipboardData?.getData('text/plain') ?? ''
      if (event.defaultPrevented || text.trim() === '' || document.querySelector('dialog[open]')) return
      if (target?.closest('input, textarea, select, [data-own-keys], [contenteditable=true]')) return
      event.preventDefault()
      latest.current(text)
    }
    document.addEventListener('paste', onPaste)
    return () => document.removeEventListener('paste', onPaste)
  }, [])
}

/** Handlers for a file dropped anywhere on the page. */
export function dropHandlers(take: (file: File) => void) {
  return {
    onDragOver: (event: DragEvent) => {
      if (event.dataTransfer.types.includes('Files')) event.preventDefault()
    },
    onDrop: (event: DragEvent) => {
      const file = event.dataTransfer.files[0]
      if (!file) return
      event.preventDefault()
      take(file)
    },
  }
}
