import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { CopyButton } from '../../ui/copy-button.tsx'
import { Dialog } from '../../ui/dialog.tsx'

/** Closed only by its button: Escape by habit would lose the text for good. */
export function TokenShownOnce({
  token,
  onClose,
}: {
  token: { name: string; token: string }
  onClose: () => void
}) {
  return (
    <Dialog title={`Token ${token.name}`}>
      <div className="space-y-3">
        <p className="bg-field p-2 font-mono text-small break-all select-all">{token.token}</p>
        <CopyButton look="primary" text={token.token} what="token">
          Copy the token
        </CopyButton>
        <Caution>
          This is the only time that it is shown. Keep it in a file of mode 0600 or in OGEE_TOKEN; never in a
          command line.
        </Caution>
        <Button onClick={onClose}>It is kept</Button>
      </div>
    </Dialog>
  )
}
