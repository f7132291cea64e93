import { setPreferences, usePreferences, type Preferences } from '#client/lib/preferences.ts'

export const themeOptions: readonly { value: Preferences['theme']; label: string }[] = [
  { value: 'system', label: 'As the system' },
  { value: 'light', label: 'Light' },
  { value: 'dark', label: 'Dark' },
]

/** Three radio buttons in a row, for pages without the account menu. */
export function ThemeSwitch() {
  const { theme } = usePreferences()
  return (
    <fieldset className="flex flex-wrap items-center gap-x-3 text-13">
      <legend className="float-left mr-3 text-ink-3">Theme</legend>
      {themeOptions.map((option) => (
        <label key={option.value} className="inline-flex min-h-6 items-center gap-1.5">
          <input
            type="radio"
            name="theme"
            className="accent-ink"
            checked={theme === option.value}
            onChange={() => setPreferences({ theme: option.value })}
          />
          {option.label}
        </label>
      ))}
    </fieldset>
  )
}
