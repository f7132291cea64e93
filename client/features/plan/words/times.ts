/** Time of day with seconds, 24 h, in the reader's zone: "14:32:07". Empty for what is no time. */
export function clockTime(iso: string): string {
  const time = new Date(iso)
  if (Number.isNaN(time.getTime())) return ''
  const two = (part: number) => String(part).padStart(2, '0')
  return `${two(time.getHours())}:${two(time.getMinutes())}:${two(time.getSeconds())}`
}

/** Time of day where it is of today, else the date: "2026-04-17". */
export function savedTime(iso: string, now: Date = new Date()): string {
  const time = new Date(iso)
  if (Number.isNaN(time.getTime())) return ''
  const sameDay = time.toDateString() === now.toDateString()
  if (sameDay) return clockTime(iso)
  const two = (part: number) => String(part).padStart(2, '0')
  return `${time.getFullYear()}-${two(time.getMonth() + 1)}-${two(time.getDate())}`
}
