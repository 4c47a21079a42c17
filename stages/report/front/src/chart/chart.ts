// A chart that can be read, zoomed and saved. It takes the place of its still form and is drawn as SVG too, so that it
// prints in lines and follows the theme by itself.

import { scaleLinear, scaleLog } from 'd3-scale'
import type { Axis, ChartData, Curve, Scene } from '../data'
import { onTheme, ramp } from '../palette'
import type { State } from '../state'
import { held, pinch } from './pinch'
import { saveCSV, savePNG, saveSVG } from './save'
import { spread } from './spread'
import { button, digits, html, svg } from './svg'
import { between, drawable, nearest, trace, type Place } from './trace'

const ends = new Set(['order', 'over-order']) // classes named at the end of the curve, with all short names

export class Chart {
  readonly root: HTMLElement
  picture!: SVGSVGElement
  private x: Axis
  private y: Axis
  private readonly wholeX: Axis
  private readonly fixedY: boolean
  private readout = html('output', { class: 'readout' })
  private plot = { left: 0, right: 0, top: 0, bottom: 0 }
  private px!: Place & { invert(p: number): number }
  private py!: Place
  private cursor: number | null = null
  private holder = html('div', { class: 'live' })
  private switches: HTMLButtonElement[] = []

  constructor(figure: HTMLElement, readonly data: ChartData, private scene: Scene, private state: State, private canFollow: boolean) {
    this.root = figure
    this.wholeX = { ...data.x }
    this.x = { ...data.x }
    this.y = { ...data.y }
    this.fixedY = !data.y.either
    const panel = figure.querySelector('.panel')!
    panel.replaceChildren(this.tools(), this.legend(), this.holder, this.readout)
    new ResizeObserver(() => this.draw()).observe(this.holder)
    const chart = this
    if (!data.square) pinch(this.holder, {
      place: x => this.place(x),
      get px() { return chart.px },
      hold: (values, at) => {
        const range = held(values, at, this.plot.left, this.plot.right, !!this.x.log)
        if (range) this.zoomTo(...range)
      },
    })
    if (data.grid) onTheme(() => this.draw())
    state.listen((now, before) => { if (now.shown !== before.shown && this.data.follow) this.mark() })
    this.draw()
  }

  private tools(): HTMLElement {
    const bar = html('div', { class: 'tools', role: 'group', 'aria-label': `${this.data.title}: view and save` })
    const either = (axis: Axis, name: string) => {
      if (!axis.either) return
      const b = button('', '', () => { axis.log = !axis.log; say(); this.draw() })
      const say = () => { b.textContent = `${name} ${axis.log ? 'log' : 'linear'}`; b.title = `${name} axis: change to ${axis.log ? 'linear' : 'logarithmic'}`; b.setAttribute('aria-label', b.title) }
      say()
      this.switches.push(b)
      bar.append(b)
    }
    either(this.x, 'x')
    either(this.y, 'y')
    bar.append(
      button('+', 'zoom in', () => this.zoom(0.5)), button('−', 'zoom out', () => this.zoom(2)), button('all', 'show the whole range', () => this.reset()),
      html('span', { class: 'gap' }),
      button('SVG', 'save as SVG', () => saveSVG(this.picture, this.data.id)), button('PNG', 'save as PNG', () => void savePNG(this.picture, this.data.id)),
      button('CSV', 'save the numbers as CSV', () => saveCSV(this.data)))
    return bar
  }

  private atEnd(c: Curve): boolean { return ends.has(c.class) || c.name.length <= 3 }

  private legend(): HTMLElement {
    const list = html('ul', { class: 'legend' }), seen = new Set<string>()
    for (const c of this.data.curves) {
      if (this.atEnd(c) || !c.name || seen.has(c.name)) continue
      seen.add(c.name)
      const key = svg('svg', { class: 'chart', viewBox: '0 0 34 12', width: 34, height: 12, 'aria-hidden': 'true' }, svg('path', { class: 'curve ' + c.class, d: 'M1 6H33' }))
      list.append(html('li', {}, key, c.name))
    }
    if (this.data.bands.length) {
      const key = svg('svg', { class: 'chart', viewBox: '0 0 34 12', width: 34, height: 12, 'aria-hidden': 'true' },
        svg('path', { class: 'hatch', d: 'M2 11L12 1M10 11L20 1M18 11L28 1M26 11L33 4' }))
      list.append(html('li', {}, key, 'rotor orders'))
    }
    const g = this.data.grid
    if (g) {
      const bar = html('span', { class: 'rampbar', 'aria-hidden': 'true' })
      list.append(html('li', {}, digits(g.low, 2), bar, `${digits(g.high, 2)} ${g.label}`))
    }
    if (!list.children.length) list.hidden = true
    return list
  }

  /** The range shown, lowest to highest. */
  range(): [number, number] { return [this.x.from, this.x.to] }

  zoomTo(from: number, to: number) {
    const w = this.wholeX
    from = Math.max(w.from, from)
    to = Math.min(w.to, to)
    if (!(to - from > 1e-4 * (w.to - w.from))) return
    this.x.from = from
    this.x.to = to
    this.draw()
  }
  zoom(factor: number) {
    const at = this.cursor ?? (this.x.from + this.x.to) / 2
    this.zoomTo(at - (at - this.x.from) * factor, at + (this.x.to - at) * factor)
  }
  reset() { this.zoomTo(this.wholeX.from, this.wholeX.to) }

  /** The vertical range for what is shown. */
  private fit() {
    if (this.fixedY) return
    let low = Infinity, high = -Infinity
    for (const c of this.data.curves)
      for (let k = 0; k < c.x.length; k++)
        if (c.x[k] >= this.x.from && c.x[k] <= this.x.to && drawable(this.y, c.y[k])) { low = Math.min(low, c.y[k]); high = Math.max(high, c.y[k]) }
    if (low > high) return
    if (this.y.log) {
      const to = Math.ceil(Math.log10(high) + 0.08), from = Math.max(Math.floor(Math.log10(low)), to - 7)
      this.y.from = 10 ** Math.min(from, to - 1)
      this.y.to = 10 ** to
    } else {
      this.y.from = Math.min(0, low)
      this.y.to = high + 0.08 * (high - this.y.from) || 1
    }
  }

  draw() {
    const width = Math.max(240, Math.round(this.holder.clientWidth)), small = width < 560
    const height = this.data.square ? Math.min(width, 460) : Math.round(Math.min(440, Math.max(250, width * 0.42)))
    this.fit()
    const names = this.data.curves.filter(c => this.atEnd(c) && c.name)
    const right = names.length ? 12 + 7.2 * Math.max(...names.map(c => c.name.length)) : 14
    const p = this.plot = { left: small ? 46 : 62, right: width - right, top: this.data.marks.length ? 36 : 16, bottom: height - 44 }
    const scale = (a: Axis, from: number, to: number) => (a.log ? scaleLog() : scaleLinear()).domain([a.from, a.to]).range([from, to])
    let { x, y } = this
    if (this.data.square) [x, y] = this.squared()
    const sx = scale(x, p.left, p.right), sy = scale(y, p.bottom, p.top)
    this.px = sx as unknown as typeof this.px
    this.py = v => Math.max(p.top, Math.min(p.bottom, y.log && v <= 0 ? p.bottom : sy(v)))
    const clip = `clip-${this.data.id}`, hatch = `hatching-${this.data.id}`
    const picture = svg('svg', { class: 'chart', viewBox: `0 0 ${width} ${height}`, width, height, role: 'img', 'aria-label': this.data.about, tabindex: '0' })
    picture.append(svg('defs', {},
      svg('clipPath', { id: clip }, svg('rect', { x: p.left, y: p.top, width: p.right - p.left, height: p.bottom - p.top })),
      svg('pattern', { id: hatch, width: '6', height: '6', patternUnits: 'userSpaceOnUse', patternTransform: 'rotate(45)' }, svg('path', { class: 'hatch', d: 'M0 0V6' }))))
    const inside = svg('g', { 'clip-path': `url(#${clip})` })
    if (this.data.grid) inside.append(this.cells())
    this.bands(picture, inside, hatch, small)
    for (const v of ticks(sy, y, 6)) {
      const at = sy(v)
      if (!this.data.grid) picture.append(svg('path', { class: 'grid', d: `M${p.left} ${at.toFixed(1)}H${p.right}` }))
      picture.append(svg('text', { class: 'tick', x: p.left - 7, y: at + 4, 'text-anchor': 'end' }, label(y, v)))
    }
    for (const v of ticks(sx, x, small ? 5 : 9)) {
      picture.append(svg('path', { class: 'axis', d: `M${sx(v).toFixed(1)} ${p.bottom}v5` }), svg('text', { class: 'tick', x: sx(v), y: p.bottom + 18, 'text-anchor': 'middle' }, label(x, v)))
    }
    picture.append(svg('path', { class: 'axis', d: `M${p.left} ${p.bottom}H${p.right}` }),
      svg('text', { class: 'label', x: (p.left + p.right) / 2, y: height - 6, 'text-anchor': 'middle' }, x.label),
      svg('text', { class: 'label', transform: `translate(13 ${(p.top + p.bottom) / 2}) rotate(-90)`, 'text-anchor': 'middle' }, y.label))
    this.marks(picture, inside)
    for (const c of this.data.curves)
      if (c.lower && c.upper) inside.append(svg('path', { class: 'around ' + c.class, d: between(c.x, c.lower, c.upper, this.x, y, this.px, this.py) }))
    for (const c of this.data.curves)
      inside.append(svg('path', { class: 'curve ' + c.class, d: this.data.square ? loop(c, this.px, sy) : trace(c.x, c.y, this.x, y, this.px, this.py) }))
    picture.append(inside)
    this.names(picture, y)
    this.points(picture, y)
    this.data.notes.forEach((n, i) => picture.append(svg('text', { class: 'note', x: p.right - 6, y: p.top + 15 + 15 * i, 'text-anchor': 'end' }, n)))
    picture.append(svg('g', { class: 'cursor', 'data-overlay': '' }))
    this.holder.replaceChildren(picture)
    this.picture = picture
    this.listen()
    this.mark()
  }

  /** Ranges of one scale around both. */
  private squared(): [Axis, Axis] {
    const p = this.plot, w = this.x.to - this.x.from, h = this.y.to - this.y.from, one = Math.max(w / (p.right - p.left), h / (p.bottom - p.top))
    const around = (a: Axis, pixels: number): Axis => { const mid = (a.from + a.to) / 2; return { ...a, from: mid - one * pixels / 2, to: mid + one * pixels / 2 } }
    return [around(this.x, p.right - p.left), around(this.y, p.bottom - p.top)]
  }

  private cells(): SVGImageElement {
    const g = this.data.grid!, p = this.plot, w = Math.max(1, Math.round(p.right - p.left)), h = Math.max(1, Math.round(p.bottom - p.top))
    const canvas = document.createElement('canvas')
    canvas.width = w
    canvas.height = h
    const context = canvas.getContext('2d')!, image = context.createImageData(w, h), colours = ramp(this.scene), columns = g.x.length - 1
    const cell = (edges: Float32Array, v: number) => { // the cell that holds a value
      if (!(v >= edges[0]) || !(v < edges[edges.length - 1])) return -1
      let low = 0, high = edges.length - 1
      while (high - low > 1) { const mid = (low + high) >> 1; if (edges[mid] <= v) low = mid; else high = mid }
      return low
    }
    const xs = Array.from({ length: w }, (_, i) => cell(g.x, this.px.invert(p.left + i + 0.5)))
    const sy = scaleLinear().domain([this.y.from, this.y.to]).range([p.bottom, p.top])
    for (let j = 0; j < h; j++) {
      const row = cell(g.y, sy.invert(p.top + j + 0.5))
      for (let i = 0; i < w; i++) {
        const level = row < 0 || xs[i] < 0 ? 0 : g.cells[row * columns + xs[i]]
        if (level) image.data.set(colours.subarray(4 * level, 4 * level + 4), 4 * (j * w + i))
      }
    }
    context.putImageData(image, 0, 0)
    return svg('image', { class: 'cells', x: p.left, y: p.top, width: w, height: h, preserveAspectRatio: 'none', href: canvas.toDataURL() })
  }

  private bands(picture: SVGSVGElement, inside: SVGGElement, hatch: string, small: boolean) {
    const p = this.plot, taken: { from: number; to: number; row: number }[] = []
    for (const b of this.data.bands) {
      const x0 = Math.max(p.left, this.px(Math.max(b.from, 1e-9))), x1 = Math.min(p.right, this.px(Math.max(b.to, 1e-9)))
      if (!(x1 > p.left) || !(x0 < p.right)) continue
      inside.append(svg('rect', { class: 'band', fill: `url(#${hatch})`, x: x0, y: p.top, width: Math.max(1.5, x1 - x0), height: p.bottom - p.top }, svg('title', {}, b.label)))
      if (small) continue
      const half = 3.4 * b.label.length, at = Math.min(Math.max((x0 + x1) / 2, p.left + half), p.right - half)
      let row = 0
      while (taken.some(t => t.row === row && t.from < at + half + 4 && t.to > at - half - 4)) row++
      taken.push({ from: at - half - 4, to: at + half + 4, row })
      picture.append(svg('text', { class: 'band-label', x: at, y: p.bottom - 6 - 13 * row, 'text-anchor': 'middle' }, b.label))
    }
  }

  private marks(picture: SVGSVGElement, inside: SVGGElement) {
    const p = this.plot, shown = this.data.marks.filter(m => m.x >= this.x.from && m.x <= this.x.to).sort((a, b) => a.x - b.x)
    if (!shown.length) return
    const width = 7 * Math.max(...shown.map(m => m.label.length)) + 5
    const at = shown.map(m => this.px(m.x)), where = spread(at, width, p.left, p.right)
    shown.forEach((m, i) => {
      inside.append(svg('path', { class: 'mode', d: `M${at[i].toFixed(1)} ${p.top}V${p.bottom}` }))
      if (!where) return
      picture.append(svg('path', { class: 'leader', d: `M${at[i].toFixed(1)} ${p.top}L${where[i].toFixed(1)} ${p.top - 9}` }))
      const word = svg('text', { class: 'mode-label', x: where[i], y: p.top - 13, 'text-anchor': 'middle' }, m.label)
      if (m.mode) {
        word.dataset.mode = String(m.mode)
        word.append(svg('title', {}, `mode ${m.mode} at ${m.x.toFixed(1)} Hz: press to see it move`))
      }
      picture.append(word)
    })
  }

  private names(picture: SVGSVGElement, y: Axis) {
    const p = this.plot, list: { x: number; y: number; c: Curve }[] = []
    for (const c of this.data.curves) {
      if (!this.atEnd(c) || !c.name) continue
      const at = last(c, this.x.to)
      if (at && at.x >= this.x.from && drawable(y, at.y) && at.y <= y.to && at.y >= y.from) { list.push({ x: Math.min(p.right, this.px(at.x)) + 5, y: this.py(at.y), c }); continue }
      for (let k = c.x.length - 1; k >= 0; k--)
        if (c.x[k] >= this.x.from && c.x[k] <= this.x.to && drawable(y, c.y[k]) && c.y[k] <= y.to && c.y[k] >= y.from) {
          list.push({ x: Math.min(p.right, this.px(c.x[k])) + 5, y: this.py(c.y[k]), c })
          break
        }
    }
    // Names at the right border give way to each other; others stand where their line ends.
    const border = list.filter(l => l.x > p.right).sort((a, b) => a.y - b.y), height = Math.max(9, Math.min(13, (p.bottom - p.top + 20) / Math.max(1, border.length)))
    const where = spread(border.map(l => l.y), height, p.top - 6, p.bottom + 4) ?? border.map(l => l.y)
    border.forEach((l, i) => { l.y = where[i] })
    for (const l of list) picture.append(svg('text', { class: 'curve-label ' + l.c.class, x: l.x, y: l.y + 4, 'text-anchor': 'start' }, l.c.name))
  }

  private points(picture: SVGSVGElement, y: Axis) {
    const p = this.plot, taken: [number, number][] = []
    const shown = this.data.points.filter(q => q.x >= this.x.from && q.x <= this.x.to && drawable(y, q.y) && q.y >= y.from && q.y <= y.to)
    for (const q of shown) if (q.label) taken.push([this.px(q.x), this.py(q.y) + 4])
    for (const q of shown) {
      const x = this.px(q.x), at = this.py(q.y), g = svg('g', { class: 'point ' + q.class })
      if (q.about) g.append(svg('title', {}, q.about))
      switch (q.class) {
        case 'observed': g.append(svg('rect', { x: x - 3.5, y: at - 3.5, width: 7, height: 7 })); break
        case 'loose': g.append(svg('path', { d: `M${(x - 2.5).toFixed(1)} ${(at - 2.5).toFixed(1)}l5 5m0 -5l-5 5` })); break
        case 'firm': g.append(svg('circle', { cx: x, cy: at, r: 2.4 })); break
        default: g.append(svg('circle', { cx: x, cy: at, r: 4 }))
      }
      picture.append(g)
      if (!q.label) continue
      const sides: [number, number][] = [[x, at - 9.5], [x + 28, at + 4], [x - 28, at + 4]]
      if (q.class === 'observed') sides.push(sides.splice(1, 1)[0])
      const free = sides.find(([u, v]) => v > p.top + 8 && u > p.left + 14 && u < p.right - 14 && !taken.some(([a, b]) => Math.abs(a - u) < 27 && Math.abs(b - v) < 13))
      if (free) {
        taken.push(free)
        picture.append(svg('text', { class: 'peak-label ' + q.class, x: free[0], y: free[1], 'text-anchor': 'middle' }, q.label))
      }
    }
  }

  /** What the curves say at a place of the horizontal axis. */
  private values(x: number): { name: string; y: number; c: Curve }[] {
    return this.data.curves.filter(c => c.x.length && x >= c.x[0] - 1e-9 && x <= c.x[c.x.length - 1] + 1e-9).map(c => ({ name: c.name, y: c.y[nearest(c.x, x)], c }))
  }

  /** Draws the cursor, or the mode or frequency that the frame shows. */
  private mark() {
    const g = this.picture.querySelector('.cursor')!, p = this.plot, shown = this.state.now.shown
    g.replaceChildren()
    let at = this.cursor
    if (this.data.follow && shown.kind === 'frequency') at = shown.frequency
    if (this.data.follow && shown.kind === 'mode') {
      const m = this.scene.modes?.find(m => m.number === shown.number)
      if (m && m.frequency >= this.x.from && m.frequency <= this.x.to) g.append(svg('path', { class: 'shown-mode', d: `M${this.px(m.frequency).toFixed(1)} ${p.top}V${p.bottom}` }))
      if (this.cursor === null) at = null
    }
    this.picture.querySelectorAll('.mode-label').forEach(e => e.classList.toggle('is-shown', shown.kind === 'mode' && (e as SVGElement).dataset.mode === String(shown.number)))
    if (at === null || at < this.x.from || at > this.x.to) {
      if (at === null) this.readout.replaceChildren()
      return
    }
    const x = this.px(at)
    g.append(svg('path', { class: 'hair', d: `M${x.toFixed(1)} ${p.top}V${p.bottom}` }))
    const values = this.values(at)
    for (const v of values) if (drawable(this.y, v.y) && v.y <= this.y.to && v.y >= this.y.from) g.append(svg('circle', { class: 'dot ' + v.c.class, cx: x, cy: this.py(v.y), r: 3.5 }))
    const [what, unit] = split(this.data.x.label), [, yUnit] = split(this.data.y.label)
    const words: (string | Node)[] = [html('b', {}, `${digits(at, 4)} ${unit}`)]
    if (!this.data.grid && !this.data.square) for (const v of values.filter(v => v.name && Number.isFinite(v.y)).slice(0, 6)) words.push(html('span', { class: 'value ' + v.c.class }, `${v.name} ${digits(v.y)} ${yUnit}`))
    this.readout.replaceChildren(...words)
    this.readout.setAttribute('aria-label', what)
  }

  /** Puts the cursor at a value; the frame follows where the axis is frequency. */
  point(x: number | null) {
    this.cursor = x === null ? null : Math.max(this.x.from, Math.min(this.x.to, x))
    if (this.cursor !== null && this.data.follow === 'frequency' && this.canFollow) this.state.set({ shown: { kind: 'frequency', frequency: this.cursor, axis: this.data.axis ?? '' }, beside: [] })
    else this.mark()
  }

  /** Where along the picture a place on the screen lies. */
  private place(clientX: number): number {
    const r = this.picture.getBoundingClientRect()
    return (clientX - r.left) * this.picture.viewBox.baseVal.width / Math.max(1, r.width)
  }

  private listen() {
    const e = this.picture, p = this.plot
    const place = (event: PointerEvent) => this.place(event.clientX)
    let from: number | null = null, box: SVGRectElement | null = null
    e.addEventListener('pointerdown', event => {
      const mode = (event.target as SVGElement).dataset?.mode
      if (mode) { this.state.set({ shown: { kind: 'mode', number: Number(mode) }, beside: [] }); return }
      if (this.data.square) return
      if (event.pointerType !== 'touch') { from = place(event); e.setPointerCapture(event.pointerId) } else this.point(this.px.invert(place(event)))
    })
    e.addEventListener('pointermove', event => {
      if (this.data.square) return
      const x = Math.max(p.left, Math.min(p.right, place(event)))
      if (from !== null && Math.abs(x - from) > 6) {
        box ??= e.appendChild(svg('rect', { class: 'zoombox', y: p.top, height: p.bottom - p.top }))
        box.setAttribute('x', String(Math.min(x, from)))
        box.setAttribute('width', String(Math.abs(x - from)))
        return
      }
      if (event.pointerType !== 'touch' || event.buttons) this.point(this.px.invert(x))
    })
    e.addEventListener('pointerup', event => {
      const start = from
      from = null
      if (!box || start === null) return
      box.remove()
      box = null
      const x = Math.max(p.left, Math.min(p.right, place(event))), [a, b] = [Math.min(x, start), Math.max(x, start)]
      this.zoomTo(this.px.invert(Math.max(p.left, a)), this.px.invert(b))
    })
    e.addEventListener('pointerleave', () => { if (!this.data.follow) { this.cursor = null; this.mark() } })
    e.addEventListener('dblclick', () => this.reset())
    e.addEventListener('keydown', event => {
      const step = (event.shiftKey ? 20 : 2) / Math.max(1, p.right - p.left)
      const now = this.cursor ?? (this.x.from + this.x.to) / 2, at = this.px(now), wide = (p.right - p.left) * step
      let done = true
      switch (event.key) {
        case 'ArrowLeft': this.point(this.px.invert(at - wide)); break
        case 'ArrowRight': this.point(this.px.invert(at + wide)); break
        case 'Home': this.point(this.x.from); break
        case 'End': this.point(this.x.to); break
        case 'PageUp': this.peak(1, now); break
        case 'PageDown': this.peak(-1, now); break
        case '+': case '=': this.zoom(0.5); this.picture.focus(); break
        case '-': this.zoom(2); this.picture.focus(); break
        case '0': this.reset(); this.picture.focus(); break
        case 'Escape': this.point(null); break
        default: done = false
      }
      if (done) event.preventDefault()
    })
  }

  /** Goes to the next marked point. */
  private peak(way: 1 | -1, from: number) {
    const at = this.data.points.map(p => p.x).filter(x => way * (x - from) > 1e-6).sort((a, b) => way * (a - b))[0]
    if (at !== undefined) this.point(at)
  }
}

/** Where a curve is at the right end of what is shown: its own end, or a place between two of its points. */
function last(c: Curve, to: number): { x: number; y: number } | null {
  const n = c.x.length
  if (!n) return null
  if (c.x[n - 1] <= to) return { x: c.x[n - 1], y: c.y[n - 1] }
  let k = n - 1
  while (k > 0 && c.x[k - 1] > to) k--
  if (k === 0) return null
  return { x: to, y: c.y[k - 1] + (c.y[k] - c.y[k - 1]) * (to - c.x[k - 1]) / (c.x[k] - c.x[k - 1]) }
}

function split(label: string): [string, string] {
  const i = label.lastIndexOf(', ')
  return i < 0 ? [label, ''] : [label.slice(0, i), label.slice(i + 2)]
}

/** A closed or turning curve, which goes back and forth along both axes. */
function loop(c: Curve, px: Place, py: Place): string {
  let out = ''
  for (let k = 0; k < c.x.length; k++) if (Number.isFinite(c.x[k]) && Number.isFinite(c.y[k])) out += (out ? 'L' : 'M') + px(c.x[k]).toFixed(1) + ' ' + py(c.y[k]).toFixed(1)
  return out
}

function ticks(scale: { ticks(n?: number): number[] }, a: Axis, n: number): number[] {
  if (a.log && a.to / a.from >= 100) {
    const out: number[] = []
    for (let d = Math.ceil(Math.log10(a.from) - 1e-9); d <= Math.log10(a.to) + 1e-9; d++) out.push(10 ** d)
    return out
  }
  if (a.log) return scaleLinear().domain([a.from, a.to]).ticks(n)
  return scale.ticks(n)
}

function label(a: Axis, v: number): string {
  if (a.log && a.to / a.from >= 100) {
    const d = Math.round(Math.log10(v))
    if (d >= -1 && d <= 1) return String(Number((10 ** d).toFixed(1)))
    return '10' + [...String(d)].map(c => '⁰¹²³⁴⁵⁶⁷⁸⁹'['0123456789'.indexOf(c)] ?? '⁻').join('')
  }
  const s = Math.abs(v) >= 1e6 || (v !== 0 && Math.abs(v) < 1e-4) ? digits(v, 2) : String(Number(v.toPrecision(8)))
  return s.replace('-', '−')
}
