import { type RenderResult, render } from '@testing-library/react'
import { type UserEvent, userEvent } from '@testing-library/user-event'
import { vi } from 'vitest'
import { App } from '../../src/app/app.tsx'
import { setConnection } from '../../src/lib/connection.ts'
import { makeQueryClient } from '../../src/lib/query-client.ts'
import { type FakeServer, fakeServer } from './web-server.ts'

export type Opened = RenderResult & { user: UserEvent; server: FakeServer }

/** Opens an address of the app against the fake server, as a browser would. */
export function open(address: string, server: FakeServer = fakeServer()): Opened {
  setConnection({ sessionEnded: false, outage: null })
  vi.stubGlobal('fetch', server.fetch)
  window.history.replaceState(null, '', address)
  const user = userEvent.setup()
  const shown = render(<App queryClient={makeQueryClient()} />)
  return { ...shown, user, server }
}
