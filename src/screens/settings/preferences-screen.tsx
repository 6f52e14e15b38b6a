import { useState } from 'react'
import { setSingleKeys, singleKeysOn } from '../../lib/keys.ts'
import { setTheme, type Theme, useTheme } from '../../lib/theme.ts'
import { Checkbox } from '../../ui/input.tsx'
import { Section } from '../../ui/section.tsx'
import { Segmented } from '../../ui/segmented.tsx'
import { SettingsHead } from './settings-head.tsx'

const themes: readonly { value: Theme; label: string }[] = [
  { value: 'system', label: 'as the system' },
  { value: 'light', label: 'light' },
  { value: 'dark', label: 'dark' },
]

/** Preferences of this browser: for everybody, kept on this computer. */
export default function PreferencesScreen() {
  const [keysOn, setKeysOn] = useState(singleKeysOn)
  return (
    <>
      <SettingsHead title="This browser" />
      <div className="mt-3 max-w-[44rem] space-y-3.5">
        <Section title="Theme">
          <Segmented label="Theme" segments={themes} value={useTheme()} onChange={setTheme} />
          <p className="mt-1.5 text-small text-ink-3">Prints are always light.</p>
        </Section>
        <Section title="Keys">
          <Checkbox
            checked={keysOn}
            onChange={(event) => {
              setSingleKeys(event.target.checked)
              setKeysOn(event.target.checked)
            }}
          >
            Single-letter keys and chords such as g d
          </Checkbox>
          <p className="mt-1.5 text-small text-ink-3">
            They act while the focus is in the page and outside fields. Keys with Ctrl stay. The list of a
            page's keys is under your name in the rail.
          </p>
        </Section>
      </div>
    </>
  )
}
