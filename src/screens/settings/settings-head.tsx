import { NavLink } from 'react-router-dom'
import { usePerson } from '../../features/session/use-person.ts'
import { paths } from '../../lib/paths.ts'
import { PageHead } from '../../ui/page-head.tsx'

const look =
  'inline-flex min-h-7 items-center border-b-2 border-transparent text-ink-2 hover:text-ink aria-[current=page]:border-ink aria-[current=page]:font-semibold aria-[current=page]:text-ink forced-colors:border-[Canvas] forced-colors:aria-[current=page]:border-[Highlight]'

export function SettingsHead({ title }: { title: string }) {
  const { role } = usePerson()
  return (
    <>
      <PageHead place="Settings" title={title} />
      {role === 'administrator' ? (
        <nav aria-label="Settings" className="mb-2 border-b border-hair print:hidden">
          <ul className="flex flex-wrap gap-x-5">
            <li>
              <NavLink end className={look} to={paths.settings}>
                This browser
              </NavLink>
            </li>
            <li>
              <NavLink className={look} to={paths.stations}>
                Stations
              </NavLink>
            </li>
            <li>
              <NavLink className={look} to={paths.tokens}>
                Tokens
              </NavLink>
            </li>
          </ul>
        </nav>
      ) : null}
    </>
  )
}
