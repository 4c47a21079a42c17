/**
 * Moves ascending places as little as possible, by least squares, so that neighbours are at least a width apart and all
 * stay within bounds; null when there is no room. Pooling of adjacent violators, as in the still charts.
 */
export function spread(at: number[], width: number, from: number, to: number): number[] | null {
  if (at.length === 0 || (at.length - 1) * width > to - from) return null
  const pools: { sum: number; n: number }[] = []
  at.forEach((x, i) => {
    pools.push({ sum: x - i * width, n: 1 })
    for (let k = pools.length - 1; k > 0 && pools[k].sum / pools[k].n < pools[k - 1].sum / pools[k - 1].n; k--) {
      pools[k - 1] = { sum: pools[k - 1].sum + pools[k].sum, n: pools[k - 1].n + pools[k].n }
      pools.length = k
    }
  })
  const out: number[] = [], last = to - (at.length - 1) * width
  for (const p of pools) {
    const q = Math.max(from, Math.min(last, p.sum / p.n))
    for (let k = 0; k < p.n; k++) out.push(q + out.length * width)
  }
  return out
}
