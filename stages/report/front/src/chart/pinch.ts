// Two fingers on a chart stretch and shift its horizontal axis: what lay under each of them stays under it.

/** A chart, as fingers see it. Places are those of px, along the picture. */
export interface Stretched {
  place(clientX: number): number
  px: { invert(p: number): number }
  /** Shows the range in which two values lie at two places. */
  hold(values: [number, number], at: [number, number]): void
}

/** The range from one end of a plot to the other in which two values lie at two places; null where fingers are too close. */
export function held(values: [number, number], at: [number, number], left: number, right: number, log: boolean): [number, number] | null {
  const closest = 8
  if (Math.abs(at[1] - at[0]) < closest) return null
  const [a, b] = log ? values.map(Math.log10) : values, slope = (b - a) / (at[1] - at[0])
  if (!(slope > 0)) return null // fingers that have passed each other
  const ends = [a + slope * (left - at[0]), a + slope * (right - at[0])]
  return (log ? ends.map(v => 10 ** v) : ends) as [number, number]
}

/** Listens for two fingers on an element that stays while the picture in it is drawn anew. */
export function pinch(element: HTMLElement, chart: Stretched) {
  const fingers = new Map<number, number>() // where each is
  let values: [number, number] | null = null
  const two = () => [...fingers.values()].slice(0, 2) as [number, number]
  element.addEventListener('pointerdown', event => {
    if (event.pointerType !== 'touch') return
    fingers.set(event.pointerId, chart.place(event.clientX))
    if (fingers.size !== 2) return
    for (const id of fingers.keys()) element.setPointerCapture(id)
    values = two().map(x => chart.px.invert(x)) as [number, number]
  }, { capture: true })
  element.addEventListener('pointermove', event => {
    if (!fingers.has(event.pointerId)) return
    fingers.set(event.pointerId, chart.place(event.clientX))
    if (!values) return
    event.stopPropagation()
    chart.hold(values, two())
  }, { capture: true })
  const lift = (event: PointerEvent) => { if (fingers.delete(event.pointerId)) values = null }
  element.addEventListener('pointerup', lift)
  element.addEventListener('pointercancel', lift)
}
