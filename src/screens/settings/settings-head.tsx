import { NavLink } from 'react-router-dom'
import { usePerson } from '../../features/session/use-person.ts'
import { paths } from '../../lib/paths.ts'
import { PageHead } from '../../ui/page-head.tsx'

const look =
  'inline-flex min-h-7 items-center border-b-2 border-transparent text-ink-2 hover:text-ink aria-[current=page]:border-ink aria-[current=page]:font-semibold aria-[current=page]:text-ink forced-colors:border-[Canvas] forced-colors:aria-[current=page]:border-[Highlight]'

/** What everybody may see stands beside what administrators alone keep. */
const places = [
  { to: paths.settings, name: 'This browser', isForAll: true },
  { to: paths.instruments, name: 'Instruments', isForAll: true },
  { to: paths.stations, name: 'Stations', isForAll: false },
  { to: paths.tokens, name: 'Tokens', isForAll: false },
] as const

export function SettingsHead({ title }: { title: string }) {
  const { role } = usePerson()
  return (
    <>
      <PageHead place="Settings" title={title} />
      <nav aria-label="Settings" className="mb-2 border-b border-hair print:hidden">
        <ul className="flex flex-wrap gap-x-5">
          {places
            .filter(({ isForAll }) => isForAll || role === 'administrator')
            .map(({ to, name }) => (
              <li key={to}>
                <NavLink end className={look} to={to}>
                  {name}
                </NavLink>
              </li>
            ))}
        </ul>
      </nav>
    </>
  )
}
