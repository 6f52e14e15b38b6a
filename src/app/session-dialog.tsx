import { SignInForm } from '../features/session/sign-in-form.tsx'
import { usePerson } from '../features/session/use-person.ts'
import { Dialog } from '../ui/dialog.tsx'

/** Over the page, which stays as it is: the same view, with everything typed, is there after signing in. */
export function SessionDialog() {
  const person = usePerson()
  return (
    <Dialog title="Your session has ended">
      <p className="mb-3 text-text">Your session has ended. Sign in here; nothing typed is lost.</p>
      <SignInForm email={person.email} />
    </Dialog>
  )
}
