import { announce } from './status.tsx'

/** Numbers show a true minus; what leaves the page has the ASCII one, so it can be pasted anywhere. */
export function toAscii(text: string): string {
  return text.replaceAll('\u2212', '-').replaceAll(/[\u2009\u202f\u00a0]/g, ' ')
}

/** Copies text as ASCII digits and says so. */
export async function copyText(text: string, said: string): Promise<boolean> {
  try {
    await navigator.clipboard.writeText(toAscii(text))
    announce(said)
    return true
  } catch {
    announce('The browser did not allow copying. Select the text and copy it by hand.')
    return false
  }
}

/** Selections copied from the page get the same treatment; fields keep what was typed. */
export function installAsciiCopy(target: Document): () => void {
  const onCopy = (event: ClipboardEvent) => {
    const text = target.getSelection()?.toString() ?? ''
    if (event.defaultPrevented || !event.clipboardData || !/[\u2212\u2009]/.test(text)) return
    event.clipboardData.setData('text/plain', toAscii(text))
    event.preventDefault()
  }
  target.addEventListener('copy', onCopy)
  return () => target.removeEventListener('copy', onCopy)
}
