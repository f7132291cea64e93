import { Checkbox } from '#client/components/checkbox.tsx'
import { FormSheet, PageHead } from '#client/components/page.tsx'
import { SelectField } from '#client/components/select-field.tsx'
import { ThemeSwitch } from '#client/components/theme-switch.tsx'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { setPreferences, usePreferences } from '#client/lib/preferences.ts'

const signs = [
  { value: 'ask', label: 'Ask when it matters' },
  { value: '.', label: 'Point: 4.096' },
  { value: ',', label: 'Comma: 4,096' },
] as const

export function PreferencesPage() {
  const preferences = usePreferences()
  usePageTitle('Units and keys')
  return (
    <>
      <PageHead title="Units and keys" say="Kept in this browser. Each change holds at once." />
      <FormSheet>
        <div className="grid gap-5">
          <SelectField
            label="Decimal sign"
            help="Comma and point are both read as the decimal sign wherever only that makes sense. This decides cases such as 1,000, and how figures are written."
            value={preferences.decimalSign ?? 'ask'}
            options={signs}
            onChange={(value) => setPreferences({ decimalSign: value === 'ask' ? undefined : value })}
          />
          <ThemeSwitch />
          <Checkbox
            label="Single letters act as keys in lists and drawings"
            help="Turn it off if you speak to your computer or touch keys by accident. It also covers / and ?."
            checked={preferences.letterKeys}
            onChange={(letterKeys) => setPreferences({ letterKeys })}
          />
        </div>
      </FormSheet>
    </>
  )
}
