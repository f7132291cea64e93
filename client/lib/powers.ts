/**
 * A figure that is written with more than three zeros behind its point, with a power of ten instead:
 * "0.000 000 049 1 dB" is "4.91e−8 dB". Its digits stay as they were rounded; all other texts come back unchanged.
 */
export function withPower(text: string): string {
  const found = /^([±+−]?)0([.,])([0\s]*)([1-9][\d\s]*?)(\s*[^\d\s].*)?$/u.exec(text)
  if (!found) return text
  const [, sign = '', point = '.', zeros = '', rest = '', unit = ''] = found
  const places = zeros.replace(/\s/gu, '').length
  if (places < 3) return text
  const digits = rest.replace(/\s/gu, '')
  const mantissa = digits.length > 1 ? `${digits.slice(0, 1)}${point}${digits.slice(1)}` : digits
  return `${sign}${mantissa}e−${places + 1}${unit}`
}
