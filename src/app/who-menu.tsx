import { type KeyboardEvent, useEffect, useRef } from 'react'
import { Link, useLocation } from 'react-router-dom'
import { SignOutButton } from '../features/session/sign-out-button.tsx'
import { usePerson } from '../features/session/use-person.ts'
import { paths } from '../lib/paths.ts'
import { Button } from '../ui/button.tsx'
import { ThemeSwitch } from './theme-switch.tsx'

/** Who is signed in; opens theme, keys and sign out. Under 480 px it is "More" and holds the places that have no room. */
export function WhoMenu({ onShowKeys }: { onShowKeys: () => void }) {
  const person = usePerson()
  const menu = useRef<HTMLDetailsElement>(null)
  const { pathname } = useLocation()
  const close = () => menu.current?.removeAttribute('open')
  useCloseOutside(menu)
  // biome-ignore lint/correctness/useExhaustiveDependencies: a new page closes the menu
  useEffect(close, [pathname])
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key !== 'Escape' || !menu.current?.open) return
    close()
    menu.current.querySelector('summary')?.focus()
  }
  return (
    <details ref={menu} className="relative" onKeyDown={onKeyDown}>
      <summary className="flex min-h-8 list-none flex-col justify-center px-2 py-1 text-right text-small text-ink-2 hover:text-ink rail:px-4 rail:text-left [&::-webkit-details-marker]:hidden">
        <span className="text-text narrow:hidden">More</span>
        <span className="sr-only font-medium narrow:not-sr-only">{person.name}</span>
        <span className="sr-only narrow:not-sr-only">{person.role}</span>
      </summary>
      <div className="absolute top-full right-0 z-10 w-56 border border-rule bg-paper p-3 rail:top-auto rail:right-auto rail:bottom-full rail:left-2">
        <p className="mb-2 narrow:hidden">
          <span className="block font-medium">{person.name}</span>
          <span className="block text-ink-2">{person.role}</span>
        </p>
        <ul className="mb-2 border-b border-hair pb-2 narrow:hidden">
          <li>
            <Link className="flex min-h-8 items-center" to={paths.ledger}>
              Ledger
            </Link>
          </li>
          <li>
            <Link className="flex min-h-8 items-center" to={paths.settings}>
              Settings
            </Link>
          </li>
        </ul>
        <ThemeSwitch />
        <div className="mt-2 flex justify-between">
          <Button
            look="quiet"
            onClick={() => {
              close()
              onShowKeys()
            }}
          >
            Keys
          </Button>
          <SignOutButton />
        </div>
      </div>
    </details>
  )
}

function useCloseOutside(menu: { current: HTMLDetailsElement | null }): void {
  useEffect(() => {
    const onPointer = (event: PointerEvent) => {
      if (event.target instanceof Node && !menu.current?.contains(event.target)) {
        menu.current?.removeAttribute('open')
      }
    }
    document.addEventListener('pointerdown', onPointer)
    return () => document.removeEventListener('pointerdown', onPointer)
  }, [menu])
}
