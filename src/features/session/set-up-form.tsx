import { type FormEvent, useState } from 'react'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { fieldMessage, Problem } from '../../ui/problem.tsx'
import { useSetUp } from './queries.ts'

type Answers = { secret: string; name: string; email: string; password: string }

function missing(answers: Answers, givenSecret: string): Partial<Answers> {
  const found: Partial<Answers> = {}
  if (givenSecret === '' && answers.secret === '')
    found.secret = 'The one-time secret is missing. The server printed it.'
  if (answers.name.trim() === '') found.name = 'Name is missing.'
  if (!/^[^@\s]+@[^@\s]+$/.test(answers.email)) found.email = 'That is no e-mail address.'
  if (answers.password.length < limits.passwordMin) {
    found.password = `At least ${limits.passwordMin} characters; ${answers.password.length} are here.`
  }
  return found
}

/** One person with role administrator; afterwards set-up is closed for good. */
export function SetUpForm({ secret, onDone }: { secret: string; onDone: () => void }) {
  const [answers, setAnswers] = useState<Answers>({ secret: '', name: '', email: '', password: '' })
  const [tried, setTried] = useState(false)
  const setUp = useSetUp()
  const wrong = missing(answers, secret)
  const message = (name: keyof Answers) =>
    (tried ? wrong[name] : undefined) ?? fieldMessage(setUp.error, `/${name}`)
  const change = (name: keyof Answers) => (event: { target: { value: string } }) =>
    setAnswers({ ...answers, [name]: event.target.value })
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (Object.keys(wrong).length > 0) return
    setUp.mutate(
      { ...answers, name: answers.name.trim(), secret: secret || answers.secret },
      { onSuccess: onDone },
    )
  }
  return (
    <form onSubmit={submit} noValidate className="space-y-3">
      {secret === '' ? (
        <Field label="One-time secret" error={message('secret')}>
          <TextInput type="password" value={answers.secret} onChange={change('secret')} />
        </Field>
      ) : null}
      <Field label="Name" error={message('name')} hint="As it will stand in records.">
        <TextInput
          autoFocus
          autoComplete="name"
          maxLength={limits.personNameMax}
          value={answers.name}
          onChange={change('name')}
        />
      </Field>
      <Field label="E-mail" error={message('email')}>
        <TextInput type="email" autoComplete="username" value={answers.email} onChange={change('email')} />
      </Field>
      <Field
        label="Password"
        error={message('password')}
        hint={`Choose a password of at least ${limits.passwordMin} characters. Long is better than odd.`}
      >
        <TextInput
          type="password"
          autoComplete="new-password"
          value={answers.password}
          onChange={change('password')}
        />
      </Field>
      <Problem error={setUp.error} />
      <Button look="primary" type="submit" disabled={setUp.isPending}>
        Create the administrator
      </Button>
    </form>
  )
}
