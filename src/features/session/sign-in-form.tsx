import { type FormEvent, useState } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { useCountdown } from '../../ui/use-countdown.ts'
import { useSignIn } from './queries.ts'

/** On its own page, and in the dialog of an ended session (then with the e-mail filled in). */
export function SignInForm({ email: known = '', onDone }: { email?: string; onDone?: () => void }) {
  const [email, setEmail] = useState(known)
  const [password, setPassword] = useState('')
  const signIn = useSignIn()
  const wait = slowedFor(signIn.error)
  const left = useCountdown(wait, signIn.submittedAt)
  const slowed = wait > 0 && left > 0
  const [tried, setTried] = useState(false)
  const missing = (value: string, what: string) => (tried && value === '' ? `${what} is missing.` : undefined)

  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (slowed || signIn.isPending || email === '' || password === '') return
    signIn.mutate({ email, password }, { onSuccess: () => onDone?.(), onError: () => setPassword('') })
  }

  return (
    <form onSubmit={submit} className="space-y-3" noValidate>
      <Field label="E-mail" error={missing(email, 'E-mail')}>
        <TextInput
          type="email"
          autoComplete="username"
          required
          autoFocus={known === ''}
          value={email}
          onChange={(event) => setEmail(event.target.value)}
        />
      </Field>
      <Field label="Password" error={signIn.error ? undefined : missing(password, 'Password')}>
        <TextInput
          type="password"
          autoComplete="current-password"
          required
          data-first={known !== '' || undefined}
          value={password}
          onChange={(event) => setPassword(event.target.value)}
        />
      </Field>
      <SignInTrouble error={signIn.error} slowed={slowed} left={left} />
      <Button look="primary" type="submit" disabled={slowed || signIn.isPending}>
        {signIn.isPending ? 'Signing in' : 'Sign in'}
      </Button>
    </form>
  )
}

function slowedFor(error: unknown): number {
  if (!isOgeeError(error, 'too-many-requests')) return 0
  const seconds = error.facts.retryAfterSeconds
  return typeof seconds === 'number' && seconds > 0 ? seconds : 30
}

/** The same words for unknown people and wrong passwords. */
function SignInTrouble({ error, slowed, left }: { error: unknown; slowed: boolean; left: number }) {
  if (isOgeeError(error, 'wrong-password') || isOgeeError(error, 'invalid-request')) {
    return (
      <p role="alert" className="border-l-3 border-bad pl-2.5">
        E-mail or password is wrong.
      </p>
    )
  }
  if (isOgeeError(error, 'too-many-requests')) {
    return (
      <div className="border-l-3 border-bad pl-2.5">
        <span role="alert">Too many tries.</span> {slowed ? `Again in ${left} s.` : 'Try again now.'}
      </div>
    )
  }
  if (isOgeeError(error, 'server-unreachable')) return null
  return <Problem error={error} />
}
