/** A complex number as plain data. */
export interface Complex {
  re: number
  im: number
}

export const complex = (re: number, im = 0): Complex => ({ re, im })

export const addComplex = (a: Complex, b: Complex): Complex => ({ re: a.re + b.re, im: a.im + b.im })

export const subtractComplex = (a: Complex, b: Complex): Complex => ({ re: a.re - b.re, im: a.im - b.im })

export const multiplyComplex = (a: Complex, b: Complex): Complex => ({
  re: a.re * b.re - a.im * b.im,
  im: a.re * b.im + a.im * b.re,
})

/** a/b; dividing by the larger part first avoids overflow (Smith 1962). */
export function divideComplex(a: Complex, b: Complex): Complex {
  if (Math.abs(b.re) >= Math.abs(b.im)) {
    const ratio = b.im / b.re
    const divisor = b.re + b.im * ratio
    return { re: (a.re + a.im * ratio) / divisor, im: (a.im - a.re * ratio) / divisor }
  }
  const ratio = b.re / b.im
  const divisor = b.re * ratio + b.im
  return { re: (a.re * ratio + a.im) / divisor, im: (a.im * ratio - a.re) / divisor }
}

export const magnitude = (a: Complex): number => Math.hypot(a.re, a.im)

/** Angle, rad, from -π to π. */
export const phase = (a: Complex): number => Math.atan2(a.im, a.re)
