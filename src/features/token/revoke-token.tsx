import type { Token } from '../../../shared/contract/tokens.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useRevokeToken } from './queries.ts'

export function RevokeToken({ token, onClose }: { token: Token; onClose: () => void }) {
  const revoke = useRevokeToken(token.id)
  const act = () =>
    revoke.mutate(undefined, {
      onSuccess: () => {
        announce(`Token ${token.name} is revoked.`)
        onClose()
      },
    })
  return (
    <Dialog title={`Revoke ${token.name}`} onClose={onClose}>
      <div className="space-y-3">
        <p>
          Whatever uses this token{token.station ? ` at ${token.station}` : ''} is refused from now on. What
          it recorded stays. This cannot be undone.
        </p>
        <Problem error={revoke.error} />
        <div className="flex gap-3">
          <Button look="primary" disabled={revoke.isPending} onClick={act}>
            Revoke {token.name}
          </Button>
          <Button data-first onClick={onClose}>
            Cancel
          </Button>
        </div>
      </div>
    </Dialog>
  )
}
