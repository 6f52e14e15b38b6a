import { Component, type ReactNode } from 'react'
import { leave } from '../lib/leave.ts'
import { Button } from '../ui/button.tsx'
import { Caution } from '../ui/caution.tsx'

/** Catches what broke while drawing a page, so that the rest of the app stands. */
export class ErrorBoundary extends Component<{ children: ReactNode }, { error: unknown }> {
  override state: { error: unknown } = { error: null }

  static getDerivedStateFromError(error: unknown): { error: unknown } {
    return { error: error ?? 'unknown' }
  }

  override render(): ReactNode {
    const { error } = this.state
    if (error === null) return this.props.children
    return (
      <div role="alert" className="p-6">
        <h1 className="border-b-2 border-ink pb-1.5 text-title font-medium">This page broke</h1>
        <div className="mt-3">
          <Caution tone="bad">
            <p>
              What you typed is kept on this computer. Load the page again; if it breaks again, tell us this:
            </p>
            <p className="mt-1 font-mono text-small">
              {error instanceof Error ? error.message : String(error)}
            </p>
          </Caution>
        </div>
        <p className="mt-4 flex gap-3">
          <Button look="primary" onClick={() => window.location.reload()}>
            Load again
          </Button>
          <Button onClick={() => leave.to('/')}>To the start</Button>
        </p>
      </div>
    )
  }
}
