import { useQuery } from '@tanstack/react-query'
import { lazy, useEffect } from 'react'
import { Navigate, useLocation } from 'react-router-dom'
import { isOgeeError } from '../../shared/errors.ts'
import { meOptions } from '../features/session/queries.ts'
import { paths } from '../lib/paths.ts'
import { Loading } from '../ui/loading.tsx'
import { Problem } from '../ui/problem.tsx'
import { AwayBanner } from './away-banner.tsx'
import { loadAhead } from './screens.ts'

const Frame = lazy(() => import('./frame.tsx'))

/** Who is not signed in goes to sign-in, and from there to the page that was wanted; nothing else is loaded for it. */
export default function Gate() {
  const { pathname, search, hash } = useLocation()
  const me = useQuery(meOptions)
  const isIn = me.data !== undefined
  // biome-ignore lint/correctness/useExhaustiveDependencies: only the first page comes ahead of the frame
  useEffect(() => {
    if (isIn) loadAhead(pathname)
  }, [isIn])
  if (isIn) return <Frame />
  if (isOgeeError(me.error, 'sign-in-required')) {
    const to = `${pathname}${search}${hash}`
    return (
      <Navigate replace to={to === '/' ? paths.signIn : `${paths.signIn}?to=${encodeURIComponent(to)}`} />
    )
  }
  return (
    <main className="p-6">
      <AwayBanner />
      {me.error ? <Problem error={me.error} /> : <Loading page>Reading who is signed in.</Loading>}
    </main>
  )
}
