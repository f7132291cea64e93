import { useCallback, useState } from 'react'

/** Width of what holds a drawing, px, within limits; `start` until it is known. */
export function useWidth(
  least: number,
  most: number,
  start: number,
): [(node: HTMLElement | null) => void, number] {
  const [width, setWidth] = useState(start)
  const hold = useCallback(
    (node: HTMLElement | null) => {
      if (!node) return
      const measure = () => {
        const { clientWidth } = node
        if (clientWidth > 0) setWidth(Math.min(most, Math.max(least, clientWidth)))
      }
      measure()
      const watch = new ResizeObserver(measure)
      watch.observe(node)
      return () => watch.disconnect()
    },
    [least, most],
  )
  return [hold, width]
}
