import { Checkbox } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useSetRule } from './queries.ts'

/** The site's rule for overdue instruments. */
export function OverdueRule({ allowed, mayChange }: { allowed: boolean; mayChange: boolean }) {
  const rule = useSetRule()
  if (!mayChange) {
    return (
      <p className="text-body">
        {allowed
          ? 'An overdue instrument records; the record then says so.'
          : 'An overdue instrument records nothing.'}
      </p>
    )
  }
  return (
    <>
      <Checkbox
        checked={allowed}
        disabled={rule.isPending}
        onChange={(event) => {
          const next = event.target.checked
          rule.mutate(next, {
            onSuccess: () =>
              announce(next ? 'Overdue instruments may record.' : 'Overdue instruments are refused.'),
          })
        }}
      >
        An overdue instrument may record
      </Checkbox>
      <p className="mt-1 text-small text-ink-3">
        The record then says so for ever, on screens, in exports and on certificates.
      </p>
      <Problem error={rule.error} />
    </>
  )
}
