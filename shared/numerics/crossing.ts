/**
 * The place between `low` and `high` where a function changes its sign, to a relative width of 1e-13. False position
 * with the far end's weight halved where it stays (the Illinois rule), so that smooth functions take about ten turns.
 * `atLow` and `atHigh` are its values at the ends, of different sign.
 * Source: Dowell and Jarratt, "A modified regula falsi method", BIT 11 (1971).
 */
export function findCrossing(
  f: (x: number) => number,
  low: number,
  high: number,
  atLow = f(low),
  atHigh = f(high),
): number {
  let [a, fa, b, fb] = [low, atLow, high, atHigh]
  let side = 0
  for (let turn = 0; turn < 100 && Math.abs(b - a) > 1e-13 * Math.max(Math.abs(a), Math.abs(b)); turn++) {
    const x = fa === fb ? (a + b) / 2 : (a * fb - b * fa) / (fb - fa)
    const inside = x > Math.min(a, b) && x < Math.max(a, b) ? x : (a + b) / 2
    const fx = f(inside)
    if (fx === 0) return inside
    if (fx > 0 === fb > 0) {
      ;[b, fb] = [inside, fx]
      if (side === 1) fa /= 2
      side = 1
    } else {
      ;[a, fa] = [inside, fx]
      if (side === -1) fb /= 2
      side = -1
    }
  }
  return Math.abs(fa) < Math.abs(fb) ? a : b
}
