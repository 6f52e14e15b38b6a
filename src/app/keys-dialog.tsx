import { listBindings } from '../lib/keys.ts'
import { Button } from '../ui/button.tsx'
import { Dialog } from '../ui/dialog.tsx'

export function KeysDialog({ onClose }: { onClose: () => void }) {
  return (
    <Dialog title="Keys of this page" onClose={onClose}>
      <table className="w-full text-body">
        <thead className="sr-only">
          <tr>
            <th>keys</th>
            <th>what they do</th>
          </tr>
        </thead>
        <tbody>
          {pageFirst().map((binding) => (
            <tr key={`${binding.keys} ${binding.does}`}>
              <td className="h-6 w-28 border-b border-hair font-mono text-small">{binding.keys}</td>
              <td className="border-b border-hair">{binding.does}</td>
            </tr>
          ))}
        </tbody>
      </table>
      <p className="my-3 text-small text-ink-2">
        Keys without Ctrl act while the focus is in the page and outside fields. Settings turns them off.
      </p>
      <Button data-first onClick={onClose}>
        Close
      </Button>
    </Dialog>
  )
}

/** The page's own keys, in whatever order its parts came; then those that every page has. */
function pageFirst() {
  const isEverywhere = ({ keys }: { keys: string }) => keys.startsWith('g ') || keys === '?'
  const all = listBindings()
  return [...all.filter((one) => !isEverywhere(one)), ...all.filter(isEverywhere)]
}
