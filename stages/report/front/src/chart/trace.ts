// Curves as paths. However long a curve is, a column of pixels gets at most four places: where the curve enters it, its
// lowest and highest value, and where it leaves; so no peak is lost and nothing is drawn twice.

import type { Axis } from '../data'

export type Place = (v: number) => number

export function drawable(a: Axis, v: number): boolean {
  return Number.isFinite(v) && (!a.log || v > 0)
}

function shows(a: Axis, v: number): boolean {
  return drawable(a, v) && v <= a.to && (a.log || v >= a.from)
}

export function trace(xs: ArrayLike<number>, ys: ArrayLike<number>, ax: Axis, ay: Axis, px: Place, py: Place): string {
  let out = '', pen = false, column = NaN
  let first = 0, low = 0, high = 0, final = 0, lowFirst = true, at = 0
  const put = (x: number, y: number) => {
    out += (pen ? 'L' : 'M') + x.toFixed(1) + ' ' + y.toFixed(1)
    pen = true
  }
  const flush = () => {
    if (Number.isNaN(column)) return
    put(at, first)
    if (lowFirst) { if (low !== first) put(at, low); if (high !== low && high !== final) put(at, high) }
    else { if (high !== first) put(at, high); if (low !== high && low !== final) put(at, low) }
    if (final !== first) put(at, final)
    column = NaN
  }
  // One place on either side of the range is kept, so that a zoomed curve runs to the borders.
  let start = 0, end = xs.length
  while (start + 1 < end && xs[start + 1] < ax.from) start++
  while (end - 1 > start && xs[end - 2] > ax.to) end--
  for (let k = start; k < end; k++) {
    if (!drawable(ax, xs[k]) || !shows(ay, ys[k])) {
      flush()
      pen = false
      continue
    }
    const x = px(xs[k]), y = py(ys[k]), c = Math.round(x)
    if (c !== column) {
      flush()
      column = c
      at = x
      first = low = high = final = y
      lowFirst = true
    } else {
      final = y
      if (y < low) { low = y; lowFirst = false }
      if (y > high) { high = y; lowFirst = true }
    }
  }
  flush()
  return out
}

/** The area between two curves. */
export function between(xs: ArrayLike<number>, lower: ArrayLike<number>, upper: ArrayLike<number>, ax: Axis, ay: Axis, px: Place, py: Place): string {
  const up: string[] = [], down: string[] = []
  for (let k = 0; k < xs.length; k++) {
    if (xs[k] < ax.from || xs[k] > ax.to || !drawable(ay, lower[k]) || !drawable(ay, upper[k])) continue
    const x = px(xs[k]).toFixed(1)
    up.push(x + ' ' + py(upper[k]).toFixed(1))
    down.push(x + ' ' + py(lower[k]).toFixed(1))
  }
  return up.length ? 'M' + up.join('L') + 'L' + down.reverse().join('L') + 'Z' : ''
}

/** The index of the value nearest to x in an ascending list. */
export function nearest(xs: ArrayLike<number>, x: number): number {
  let low = 0, high = xs.length - 1
  if (high < 0) return -1
  while (high - low > 1) {
    const mid = (low + high) >> 1
    if (xs[mid] < x) low = mid
    else high = mid
  }
  return Math.abs(xs[high] - x) < Math.abs(xs[low] - x) ? high : low
}
