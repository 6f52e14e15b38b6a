import { setTheme, type Theme, useTheme } from '../lib/theme.ts'
import { Segmented } from '../ui/segmented.tsx'

const themes: readonly { value: Theme; label: string }[] = [
  { value: 'system', label: 'system' },
  { value: 'light', label: 'light' },
  { value: 'dark', label: 'dark' },
]

export function ThemeSwitch() {
  return <Segmented label="Theme" segments={themes} value={useTheme()} onChange={setTheme} />
}
