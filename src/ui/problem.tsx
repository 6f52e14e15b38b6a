import { isOgeeError, type OgeeError } from '../../shared/errors.ts'
import { Caution } from './caution.tsx'

/** A refusal or an outage as people read it: the sentence, the places, and which request it was. */
export function Problem({ error }: { error: unknown }) {
  if (error === null || error === undefined) return null
  const known = isOgeeError(error)
  const instance = known ? error.facts.instance : undefined
  return (
    <div role="alert">
      <Caution tone="bad">
        <p>{known ? sentence(error) : 'Something is broken in this page. What you typed is kept.'}</p>
        {known && error.errors.length > 0 ? (
          <ul className="mt-1">
            {error.errors.map((place) => (
              <li key={`${place.path} ${place.message}`}>
                {place.path ? <code className="font-mono text-small text-ink-2">{place.path}</code> : null}{' '}
                {place.message}
              </li>
            ))}
          </ul>
        ) : null}
        {instance ? <p className="mt-1 text-small text-ink-3">Request {String(instance)}</p> : null}
      </Caution>
    </div>
  )
}

function sentence(error: OgeeError): string {
  if (error.code !== 'sign-in-required') return error.message
  // Seen once the dialog over the page has been answered; nothing is sent again by itself.
  return 'Your session had ended when this was sent. It is kept here: send it again.'
}

/** The message for one field of a form, by its JSON pointer (`/email`). */
export function fieldMessage(error: unknown, path: string): string | undefined {
  if (!isOgeeError(error)) return undefined
  return error.errors.find((place) => place.path === path)?.message
}
