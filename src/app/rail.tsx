import { NavLink } from 'react-router-dom'
import { paths } from '../lib/paths.ts'
import { Mark } from '../ui/mark.tsx'
import { WhoMenu } from './who-menu.tsx'

/** A place stands in the rail only when there is something real behind it. */
const places = [
  { to: paths.designs, name: 'Designs', keys: 'g d', narrow: true },
  { to: paths.bench, name: 'Bench', keys: 'g b', narrow: true },
  { to: paths.lots, name: 'Lots', keys: 'g l', narrow: true },
  { to: paths.history, name: 'History', keys: 'g h', narrow: true },
  { to: paths.ledger, name: 'Ledger', keys: 'g g', narrow: false },
  { to: paths.settings, name: 'Settings', keys: 'g s', narrow: false },
] as const

const placeLook =
  'flex min-h-8 items-center justify-between border-b-3 border-transparent px-2 text-text text-ink-2 hover:text-ink aria-[current=page]:border-ink aria-[current=page]:font-semibold aria-[current=page]:text-ink forced-colors:border-[Canvas] forced-colors:aria-[current=page]:border-[Highlight] rail:min-h-[30px] rail:border-b-0 rail:border-l-3 rail:px-[13px]'

/** 116 px at the left of wide screens; under 960 px a bar at the top, under 480 px with the rest behind "More". */
export function Rail({ onShowKeys }: { onShowKeys: () => void }) {
  return (
    <header className="flex items-center gap-2 border-b border-hair px-3 rail:sticky rail:top-0 rail:h-dvh rail:w-[116px] rail:shrink-0 rail:flex-col rail:items-stretch rail:gap-0 rail:border-r rail:border-b-0 rail:px-0 rail:py-3 print:hidden">
      <NavLink
        to="/"
        aria-label="Ogee, to the start"
        className="flex min-h-8 items-center gap-2 text-head font-medium rail:mb-3 rail:px-4"
      >
        <Mark className="size-[18px]" />
        <span aria-hidden="true" className="hidden narrow:inline">
          Ogee
        </span>
      </NavLink>
      <nav aria-label="Places" className="min-w-0">
        <ul className="flex rail:block">
          {places.map((place) => (
            <li key={place.to} className={place.narrow ? '' : 'hidden narrow:block'}>
              <NavLink to={place.to} className={placeLook}>
                {place.name}
                <span aria-hidden="true" className="hidden font-mono text-plot text-ink-3 rail:inline">
                  {place.keys}
                </span>
              </NavLink>
            </li>
          ))}
        </ul>
      </nav>
      <div className="ml-auto rail:mt-auto rail:ml-0">
        <WhoMenu onShowKeys={onShowKeys} />
      </div>
    </header>
  )
}
