import { useEffect, useRef } from 'react'
import { readStored, writeStored } from './storage.ts'

/**
 * Keys of the pages. A binding is a chord of single keys ("g d"), one key ("j", "]", "?"), or a key with modifiers
 * ("Ctrl+Enter"). Keys without Ctrl act only while focus is in the page's main part and outside fields, and can be
 * turned off (WCAG 2.1.4). A barcode reader types fast and ends with Enter: while a page listens for one, single keys
 * wait a moment so that its burst triggers nothing else.
 */
export type Binding = { keys: string; does: string; run: () => void }

const stack = new Set<{ bindings: readonly Binding[] }>()
const scanners = new Set<(text: string) => void>()
const chordWithinMs = 1500
const burstGapMs = 50
const burstLeast = 4
let chord = ''
let chordTimer: ReturnType<typeof setTimeout> | undefined
let burst = ''
let burstTimer: ReturnType<typeof setTimeout> | undefined

export function singleKeysOn(): boolean {
  return readStored('single-keys') !== 'off'
}
export function setSingleKeys(on: boolean): void {
  writeStored('single-keys', on ? null : 'off')
}

/** What the `?` list shows: the newest page's keys first. */
export function listBindings(): Binding[] {
  return [...stack].reverse().flatMap((entry) => entry.bindings)
}

/** Registers the keys of a page or part while it is mounted. The newest to name a key has it. */
export function useKeys(bindings: readonly Binding[]): void {
  const entry = useRef<{ bindings: readonly Binding[] }>({ bindings })
  entry.current.bindings = bindings
  useEffect(() => {
    const own = entry.current
    stack.add(own)
    return () => {
      stack.delete(own)
    }
  }, [])
}

/** Takes a burst of a barcode reader (typed outside fields, ended by Enter). */
export function useScan(take: (text: string) => void): void {
  const latest = useRef(take)
  latest.current = take
  useEffect(() => {
    const own = (text: string) => latest.current(text)
    scanners.add(own)
    return () => {
      scanners.delete(own)
    }
  }, [])
}

function inField(target: EventTarget | null): boolean {
  return (
    target instanceof HTMLElement &&
    (target.isContentEditable ||
      target.closest('input:not([type=radio]):not([type=checkbox]), textarea, select, [data-own-keys]') !==
        null)
  )
}

function inMain(target: EventTarget | null): boolean {
  if (!(target instanceof HTMLElement)) return true
  return target === document.body || target.closest('main') !== null
}

function find(keys: string): Binding | undefined {
  return listBindings().find((binding) => binding.keys === keys)
}

function startsChord(key: string): boolean {
  return listBindings().some((binding) => binding.keys.startsWith(`${key} `))
}

function press(key: string, event?: KeyboardEvent): void {
  clearTimeout(chordTimer)
  const binding = (chord && find(`${chord} ${key}`)) || (chord ? undefined : find(key))
  const waits = !chord && !binding && startsChord(key)
  chord = waits ? key : ''
  if (waits) chordTimer = setTimeout(() => (chord = ''), chordWithinMs)
  if (!binding) return
  event?.preventDefault()
  binding.run()
}

function later(event: KeyboardEvent): void {
  clearTimeout(burstTimer)
  if (event.key === 'Enter' && burst.length >= burstLeast) {
    event.preventDefault()
    const text = burst
    burst = ''
    for (const scanner of scanners) scanner(text)
    return
  }
  if (event.key.length !== 1) {
    burst = ''
    if (singleKeysOn()) press(event.key, event)
    return
  }
  burst += event.key
  burstTimer = setTimeout(() => {
    const typed = burst
    burst = ''
    if (typed.length === 1 && singleKeysOn()) press(typed)
  }, burstGapMs)
}

/** Escape leaves a field. Parts with keys of their own (`data-own-keys`) decide for themselves. */
function leaveField({ key, target }: KeyboardEvent): void {
  if (key === 'Escape' && target instanceof HTMLElement && !target.closest('[data-own-keys]')) target.blur()
}

function onKeyDown(event: KeyboardEvent): void {
  if (event.defaultPrevented || event.isComposing || event.altKey || event.metaKey) return
  if (event.key === 'Shift' || event.key === 'CapsLock') return
  // What is typed into a field is looked at no further: it must be quick.
  const isTyped = !event.ctrlKey && event.key !== 'Escape' && inField(event.target)
  if (isTyped) return
  if (document.querySelector('dialog[open]')) return
  if (event.ctrlKey) {
    const binding = find(`Ctrl+${event.key.length === 1 ? event.key.toUpperCase() : event.key}`)
    if (binding) {
      event.preventDefault()
      binding.run()
    }
    return
  }
  if (inField(event.target)) {
    leaveField(event)
    return
  }
  if (!inMain(event.target)) return
  // Enter and Space belong to the focused control.
  const onControl = event.target instanceof HTMLElement && event.target.closest('a, button, summary, label')
  if (onControl && (event.key === 'Enter' || event.key === ' ')) return
  if (scanners.size > 0) later(event)
  else if (singleKeysOn()) press(event.key, event)
}

/** Called once by the frame. */
export function installKeys(): () => void {
  document.addEventListener('keydown', onKeyDown)
  return () => document.removeEventListener('keydown', onKeyDown)
}
