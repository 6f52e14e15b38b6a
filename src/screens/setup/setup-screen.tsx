import { useQuery } from '@tanstack/react-query'
import { useEffect, useState } from 'react'
import { useNavigate } from 'react-router-dom'
import { setupOptions } from '../../features/session/queries.ts'
import { SetUpForm } from '../../features/session/set-up-form.tsx'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Problem } from '../../ui/problem.tsx'
import { WordMark } from '../../ui/word-mark.tsx'

/** The secret comes behind the # (never sent to a server), and leaves the address bar and the history at once. */
function takeSecret(): string {
  const secret = window.location.hash.slice(1)
  if (secret !== '') {
    window.history.replaceState(window.history.state, '', window.location.pathname + window.location.search)
  }
  return secret
}

export default function SetupScreen() {
  const [secret, setSecret] = useState('')
  const setup = useQuery(setupOptions)
  const navigate = useNavigate()
  useEffect(() => {
    document.title = 'Set up · Ogee'
    const taken = takeSecret()
    if (taken !== '') setSecret(taken)
  }, [])
  return (
    <main className="mx-auto min-h-dvh max-w-[332px] px-4 pt-8 pb-4 narrow:px-0 narrow:pt-[14vh]">
      <WordMark />
      <h1 className="mt-4 mb-2 text-head font-medium">First administrator</h1>
      {setup.isPending ? <Loading>Reading whether set-up is open.</Loading> : null}
      {setup.error ? <Problem error={setup.error} /> : null}
      {setup.data?.open ? (
        <SetUpForm secret={secret} onDone={() => void navigate('/', { replace: true })} />
      ) : null}
      {setup.data && !setup.data.open ? (
        <p className="text-text">
          Set-up is closed: there is an administrator. <LinkButton to={paths.signIn}>Sign in</LinkButton>
        </p>
      ) : null}
    </main>
  )
}
