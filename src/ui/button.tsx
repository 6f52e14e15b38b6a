import type { ComponentProps } from 'react'
import { Link } from 'react-router-dom'

/** Primary is the one act of the page, in ink; plain has a line round it; quiet is underlined text. */
export type ButtonLook = 'primary' | 'plain' | 'quiet'

const shared = 'inline-flex items-center gap-2 text-body whitespace-nowrap disabled:cursor-default'
const looks: Record<ButtonLook, string> = {
  primary:
    'min-h-7 rounded-sm border border-ink bg-ink px-3 font-semibold text-paper disabled:border-ink-3 disabled:bg-ink-3 forced-colors:border-[ButtonBorder] forced-colors:text-[ButtonText] forced-colors:disabled:text-[GrayText]',
  plain:
    'min-h-7 rounded-sm border border-rule px-3 font-semibold text-ink disabled:text-ink-3 forced-colors:disabled:text-[GrayText]',
  quiet:
    // A target of 24 px that makes no table row taller than it is.
    'min-h-6 px-0.5 text-ink [dd_&]:-my-[3px] [td_&]:-my-[3px] [th_&]:-my-[3px] underline decoration-rule underline-offset-4 hover:decoration-ink disabled:text-ink-3 disabled:no-underline',
}

function classes(look: ButtonLook, extra: string | undefined): string {
  return `${shared} ${looks[look]} ${extra ?? ''}`
}

export function Button({
  look = 'plain',
  className,
  type = 'button',
  ...rest
}: ComponentProps<'button'> & { look?: ButtonLook }) {
  return <button type={type} className={`print:hidden ${classes(look, className)}`} {...rest} />
}

/** A link within the app that looks like a button; quiet is the plain link of tables and sentences. */
export function LinkButton({
  look = 'quiet',
  className,
  ...rest
}: ComponentProps<typeof Link> & { look?: ButtonLook }) {
  // Links print as text; one that looks like a button is an act and does not print.
  const printed = look === 'quiet' ? 'print:no-underline' : 'print:hidden'
  return <Link className={`${printed} ${classes(look, className)}`} {...rest} />
}
