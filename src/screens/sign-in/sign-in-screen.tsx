import { useQuery } from '@tanstack/react-query'
import { useEffect } from 'react'
import { useNavigate, useSearchParams } from 'react-router-dom'
import { PublicFacts } from '../../features/ledger/public-facts.tsx'
import { setupOptions } from '../../features/session/queries.ts'
import { SignInForm } from '../../features/session/sign-in-form.tsx'
import { useConnection } from '../../lib/connection.ts'
import { Caution } from '../../ui/caution.tsx'
import { WordMark } from '../../ui/word-mark.tsx'
import { wanted } from './wanted.ts'

/** Sign-in outside the frame; afterwards the page that was wanted. */
export default function SignInScreen() {
  const navigate = useNavigate()
  const [search] = useSearchParams()
  const setup = useQuery(setupOptions)
  const { outage } = useConnection()
  useEffect(() => {
    document.title = 'Sign in · Ogee'
  }, [])
  return (
    <main className="mx-auto flex min-h-dvh max-w-[332px] flex-col px-4 pt-8 pb-4 narrow:px-0 narrow:pt-[21vh]">
      <WordMark />
      <h1 className="mt-4 mb-2 text-head font-medium">Sign in</h1>
      {outage ? (
        <div className="mb-3">
          <Caution tone="bad">{outage} Try again in a moment.</Caution>
        </div>
      ) : null}
      <SignInForm onDone={() => void navigate(wanted(search.get('to')), { replace: true })} />
      <p className="mt-4 mb-8 text-small text-ink-2">
        {setup.data?.open
          ? 'Nobody has an account here yet. Open the set-up address that the server printed when it started.'
          : 'No account: ask your administrator for one. Scripts use a token, not a password.'}
      </p>
      <div className="mt-auto">
        <PublicFacts />
      </div>
    </main>
  )
}
