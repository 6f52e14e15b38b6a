/** What this browser keeps: preferences and drafts. Storage may be shut or full; nothing may break for it. */

const prefix = 'ogee.'

export function readStored(name: string): unknown {
  try {
    const text = localStorage.getItem(prefix + name)
    return text === null ? null : (JSON.parse(text) as unknown)
  } catch {
    return null
  }
}

/** True when it was kept. Null takes it away. */
export function writeStored(name: string, value: unknown): boolean {
  try {
    if (value === null) localStorage.removeItem(prefix + name)
    else localStorage.setItem(prefix + name, JSON.stringify(value))
    return true
  } catch {
    return false
  }
}
