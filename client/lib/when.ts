/** Dates as ISO 8601, times with 24 hours, both in the reader's own time zone. */
const two = (n: number) => String(n).padStart(2, '0')

export const dateOf = (iso: string): string => {
  const d = new Date(iso)
  return `${d.getFullYear()}-${two(d.getMonth() + 1)}-${two(d.getDate())}`
}

export const timeOf = (iso: string): string => {
  const d = new Date(iso)
  return `${two(d.getHours())}:${two(d.getMinutes())}`
}

/** The time if it was today, the date otherwise. */
export const whenOf = (iso: string, now = new Date()): string =>
  dateOf(iso) === dateOf(now.toISOString()) ? timeOf(iso) : dateOf(iso)
