import { Button } from '../../ui/button.tsx'
import { useSignOut } from './queries.ts'

export function SignOutButton() {
  const signOut = useSignOut()
  return (
    <Button look="quiet" disabled={signOut.isPending} onClick={() => signOut.mutate()}>
      Sign out
    </Button>
  )
}
