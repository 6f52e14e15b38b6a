import { configure, type RenderResult, render } from '@testing-library/react'
import { type UserEvent, userEvent } from '@testing-library/user-event'
import { vi } from 'vitest'
import { App } from '../../src/app/app.tsx'
import { setConnection } from '../../src/lib/connection.ts'
import { makeQueryClient } from '../../src/lib/query-client.ts'
import { type FakeServer, fakeServer } from './web-server.ts'

// Looking for roles in a page of fifty rows is slow in jsdom; this is a deadline and no wait.
configure({ asyncUtilTimeout: 8000, getElementError: (message) => new Error(message?.slice(0, 300)) })

// jsdom has the dialog element and not its modal: what the platform does about focus is seen in Chromium.
HTMLDialogElement.prototype.showModal = function () {
  this.open = true
}
HTMLDialogElement.prototype.close = function () {
  this.open = false
}

export type Opened = RenderResult & { user: UserEvent; server: FakeServer }

/** Scrolls the page as a wheel would: the place, then the event. Every part stands at its beginning. */
export function scrollPage(top: number): void {
  Element.prototype.getBoundingClientRect = () => new DOMRect(0, -top, 0, 0)
  Object.defineProperty(window, 'scrollY', { value: top, configurable: true })
  window.dispatchEvent(new Event('scroll'))
}

/** Opens an address of the app against the fake server, as a browser would; `kept` is what a reload finds in the history entry. */
export function open(address: string, server: FakeServer = fakeServer(), kept: unknown = null): Opened {
  setConnection({ sessionEnded: false, outage: null })
  vi.stubGlobal('fetch', server.fetch)
  scrollPage(0)
  // jsdom only says that it cannot; nothing is laid out, so a place is only a number.
  vi.stubGlobal('scrollTo', (_left: number, top: number) => scrollPage(top))
  // As in index.html.
  document.documentElement.lang = 'en'
  window.history.replaceState(kept === null ? null : { usr: kept, key: 'kept', idx: 0 }, '', address)
  const user = userEvent.setup()
  const shown = render(<App queryClient={makeQueryClient()} />)
  return { ...shown, user, server }
}
