import { Button, type ButtonLook } from './button.tsx'
import { copyText } from './clipboard.ts'
import { KeyHint } from './key-hint.tsx'

/** `what` names the thing for speech: "Copy gain code". */
export function CopyButton({
  text,
  what,
  look = 'quiet',
  hint,
  children = 'copy',
}: {
  text: string
  what: string
  look?: ButtonLook
  /** A key that does the same; the screen registers it. */
  hint?: string
  children?: string
}) {
  return (
    <>
      <Button
        look={look}
        // What is seen is part of what is spoken (WCAG 2.5.3); the key beside it is not part of the name.
        aria-label={children === 'copy' ? `copy ${what}` : undefined}
        onClick={() => void copyText(text, `Copied ${what}.`)}
      >
        {children}
      </Button>
      {hint ? <KeyHint keys={hint} /> : null}
    </>
  )
}
