// The frame beside the text: what is shown, in words; the stage; and everything that changes it.

import { button, html } from '../chart/svg'
import { download } from '../chart/save'
import type { Mode, Scene } from '../data'
import { token } from '../palette'
import type { Colouring, State } from '../state'
import { View, looks } from './view'

export class Companion {
  readonly view: View
  private stage = html('div', { class: 'stage' })
  private overlay = html('div', { class: 'names', 'aria-hidden': 'true' })
  private title = html('h2', { class: 'shown' })
  private about = html('p', { class: 'shown-about' })
  private play!: HTMLButtonElement
  private select!: HTMLSelectElement
  private hint = html('div', { class: 'hint', 'aria-hidden': 'true' })

  constructor(root: HTMLElement, private scene: Scene, private state: State, private hasOperating: boolean) {
    root.hidden = false
    root.append(html('div', { class: 'heading' }, this.title, this.about), this.stage)
    this.view = new View(this.stage, scene, state)
    const canvas = this.view.canvas
    canvas.tabIndex = 0
    canvas.setAttribute('role', 'img')
    this.stage.append(this.overlay, this.hint)
    root.append(this.transport(), this.options())
    this.view.after.push(() => this.label())
    this.keys(canvas)
    canvas.addEventListener('pointermove', e => {
      if (e.buttons) { this.hint.textContent = ''; return }
      const box = canvas.getBoundingClientRect()
      this.hint.textContent = this.view.under(e.clientX - box.left, e.clientY - box.top)
    })
    canvas.addEventListener('pointerleave', () => { this.hint.textContent = '' })
    state.listen(() => this.say())
    this.say()
  }

  private modes(): Mode[] { return this.scene.modes ?? [] }

  private transport(): HTMLElement {
    this.play = button('', '', () => this.state.set({ playing: !this.state.now.playing }))
    this.play.classList.add('play')
    this.select = html('select', { 'aria-label': 'what moves' })
    this.select.append(html('option', { value: 'rest' }, 'at rest'))
    for (const m of this.modes()) this.select.append(html('option', { value: String(m.number) }, `mode ${m.number} · ${m.frequency.toFixed(1)} Hz`))
    if (this.hasOperating) this.select.append(html('option', { value: 'frequency' }, 'as driven, at the cursor'))
    this.select.addEventListener('change', () => {
      const v = this.select.value
      if (v === 'rest') this.state.set({ shown: { kind: 'rest' }, beside: [] })
      else if (v === 'frequency') this.state.set({ shown: { kind: 'frequency', frequency: this.currentFrequency(), axis: this.axis() }, beside: [] })
      else this.state.set({ shown: { kind: 'mode', number: Number(v) }, beside: [] })
    })
    return html('div', { class: 'transport', role: 'group', 'aria-label': 'motion' },
      button('‹', 'the mode below', () => this.next(-1)), this.play, button('›', 'the mode above', () => this.next(1)), this.select, this.beside())
  }

  /** The axis that the driven frame was last seen on, or the first. */
  private axis(): string {
    const s = this.state.now.shown
    return s.kind === 'frequency' ? s.axis : this.scene.operating[0]?.axis ?? ''
  }

  private currentFrequency(): number {
    const s = this.state.now.shown
    return s.kind === 'mode' ? this.modes().find(m => m.number === s.number)?.frequency ?? 0 : s.kind === 'frequency' ? s.frequency : this.modes()[0]?.frequency ?? 0
  }

  private beside(): HTMLElement {
    const b = button('side by side', 'play this mode and its neighbours side by side', () => {
      const now = this.state.now
      if (now.beside.length > 1) { this.state.set({ beside: [] }); return }
      const list = this.modes(), s = now.shown, i = Math.max(0, list.findIndex(m => s.kind === 'mode' && m.number === s.number))
      const start = Math.max(0, Math.min(list.length - 4, i - 1))
      this.state.set({ beside: list.slice(start, start + 4).map(m => m.number) })
    })
    b.setAttribute('aria-pressed', 'false')
    this.state.listen(now => b.setAttribute('aria-pressed', String(now.beside.length > 1)))
    if (this.modes().length < 2) b.hidden = true
    return b
  }

  /** Shows the mode above or below, whatever is shown. */
  next(way: 1 | -1) {
    const list = this.modes(), s = this.state.now.shown
    if (!list.length) return
    const f = this.currentFrequency()
    let i = s.kind === 'mode' ? list.findIndex(m => m.number === s.number) + way : way > 0 ? list.findIndex(m => m.frequency > f) : list.findLastIndex(m => m.frequency < f)
    if (i < 0 || i >= list.length) i = way > 0 ? 0 : list.length - 1
    this.state.set({ shown: { kind: 'mode', number: list[i].number }, beside: [] })
  }

  private options(): HTMLElement {
    const state = this.state
    const slider = (name: string, key: 'amplitude' | 'speed', min: number, max: number) => {
      const input = html('input', { type: 'range', min: String(min), max: String(max), step: '0.01', value: String(state.now[key]) })
      input.addEventListener('input', () => state.set({ [key]: Number(input.value) }))
      return html('label', {}, name, input)
    }
    const tick = (name: string, key: 'rest' | 'nodeLines' | 'names' | 'gyro') => {
      const input = html('input', { type: 'checkbox' })
      input.checked = state.now[key]
      input.addEventListener('change', () => state.set({ [key]: input.checked }))
      return html('label', { class: 'tick' }, input, name)
    }
    const colouring = html('select', { 'aria-label': 'colour' })
    const kinds: [Colouring, string][] = [['displacement', 'displacement'], ['strain', 'strain energy density'], ['part', 'part']]
    for (const [value, name] of kinds) {
      if (value === 'strain' && !this.scene.density) continue
      colouring.append(html('option', { value }, name))
    }
    colouring.addEventListener('change', () => state.set({ colouring: colouring.value as Colouring }))
    const key = html('span', { class: 'key' }, 'none', html('span', { class: 'rampbar', 'aria-hidden': 'true' }), 'most')
    const within = html('span', { class: 'key' }, 'of the plates themselves: what joints, pressed and glued faces, standoffs and mounts store is not in it')
    state.listen(now => {
      key.hidden = now.colouring === 'part'
      within.hidden = now.colouring !== 'strain'
      colouring.value = now.colouring
    })
    within.hidden = true
    const views = html('div', { class: 'looks', role: 'group', 'aria-label': 'look' })
    for (const l of looks) views.append(button(l.name, `look ${l.name}`, () => this.view.look(l)))
    const box = html('details', { class: 'options' }, html('summary', {}, 'View, colour and save'),
      html('div', { class: 'rows' },
        html('div', {}, slider('amplitude', 'amplitude', 0, 0.2), slider('speed', 'speed', 0.05, 3)),
        html('div', {}, html('label', {}, 'colour by ', colouring), key, within),
        html('div', {}, tick('outline at rest', 'rest'), tick('lines that stay still', 'nodeLines'), tick('turning of the gyro', 'gyro'), tick('names', 'names')),
        views,
        html('div', { class: 'looks' }, button('save picture', 'save what is shown as PNG', () => void this.picture()), this.clipButton())))
    box.open = innerWidth >= 1100 && innerHeight >= 760
    return box
  }

  private clipButton(): HTMLElement {
    const b = button('save clip', 'save one cycle as a short video', () => void this.clip(b))
    if (typeof MediaRecorder === 'undefined' || !('captureStream' in HTMLCanvasElement.prototype)) b.hidden = true
    return b
  }

  private name(): string { return this.title.textContent!.replace(/[^A-Za-z0-9.]+/g, '-').replace(/^-|-$/g, '') || 'frame' }

  /** The stage with paper behind it and words on it. */
  private compose(target: HTMLCanvasElement) {
    const from = this.view.canvas, g = target.getContext('2d')!
    target.width = from.width
    target.height = from.height
    g.fillStyle = token('card')
    g.fillRect(0, 0, target.width, target.height)
    g.drawImage(from, 0, 0)
    const k = from.width / Math.max(1, from.clientWidth)
    g.fillStyle = token('ink')
    g.font = `${13 * k}px system-ui, sans-serif`
    for (const c of this.view.layout()) g.fillText(c.caption, (c.left + 10) * k, (c.top + 20) * k)
    for (const n of this.view.names()) { g.textAlign = 'center'; g.fillText(n.text, n.x * k, n.y * k); g.textAlign = 'start' }
  }

  async picture() {
    this.view.render()
    const c = document.createElement('canvas')
    this.compose(c)
    const blob = await new Promise<Blob | null>(done => c.toBlob(done, 'image/png'))
    if (blob) download(this.name() + '.png', blob)
  }

  /** Records one cycle, or two seconds. */
  async clip(b: HTMLButtonElement): Promise<void> {
    const c = document.createElement('canvas')
    this.view.render()
    this.compose(c)
    const kinds = ['video/mp4', 'video/webm;codecs=vp9', 'video/webm'].filter(k => MediaRecorder.isTypeSupported(k))
    const recorder = new MediaRecorder(c.captureStream(30), kinds.length ? { mimeType: kinds[0] } : undefined), parts: Blob[] = []
    const was = this.state.now.playing
    recorder.ondataavailable = e => parts.push(e.data)
    const ended = new Promise(done => { recorder.onstop = done })
    b.disabled = true
    b.textContent = 'recording …'
    this.state.set({ playing: true })
    let rolling = true
    const frame = () => { if (rolling) this.compose(c) }
    this.view.after.push(frame)
    recorder.start()
    await new Promise(done => setTimeout(done, Math.min(4000, Math.max(1500, 1000 / this.state.now.speed))))
    rolling = false
    this.view.after.splice(this.view.after.indexOf(frame), 1)
    recorder.stop()
    await ended
    this.state.set({ playing: was })
    b.disabled = false
    b.textContent = 'save clip'
    const type = recorder.mimeType || 'video/webm'
    download(this.name() + (type.includes('mp4') ? '.mp4' : '.webm'), new Blob(parts, { type }))
  }

  private keys(canvas: HTMLCanvasElement) {
    canvas.addEventListener('keydown', e => {
      let done = true
      switch (e.key) {
        case 'ArrowLeft': this.view.orbit(-0.12, 0); break
        case 'ArrowRight': this.view.orbit(0.12, 0); break
        case 'ArrowUp': this.view.orbit(0, 0.12); break
        case 'ArrowDown': this.view.orbit(0, -0.12); break
        case '+': case '=': this.view.zoom(1 / 1.15); break
        case '-': this.view.zoom(1.15); break
        case '0': this.view.look(looks[0]); break
        case ' ': this.state.set({ playing: !this.state.now.playing }); break
        case '[': case 'PageUp': this.next(-1); break
        case ']': case 'PageDown': this.next(1); break
        default: done = false
      }
      if (done) e.preventDefault()
    })
  }

  /** Says what is shown. */
  private say() {
    const now = this.state.now, s = now.shown
    this.play.textContent = now.playing ? '❚❚' : '▶'
    this.play.title = now.playing ? 'stop the motion' : 'play the motion'
    this.play.setAttribute('aria-label', this.play.title)
    this.select.value = s.kind === 'mode' ? String(s.number) : s.kind
    if (now.beside.length > 1) {
      this.title.textContent = `Modes ${now.beside.join(', ')}`
      this.about.textContent = 'Side by side, each enlarged to the same largest displacement.'
    } else if (s.kind === 'mode') {
      const m = this.modes().find(m => m.number === s.number)
      this.title.textContent = m ? `Mode ${m.number} · ${m.frequency.toFixed(1)} Hz` : `Mode ${s.number}`
      this.about.textContent = m ? `${m.about} Damping ratio ${(100 * m.damping).toFixed(2)} %.` : ''
    } else if (s.kind === 'frequency') {
      this.title.textContent = `As driven · ${s.frequency.toFixed(1)} Hz`
      this.about.textContent = `All rotors under the assumed broadband source: the motion in step with the ${s.axis} rate of the gyro. Move along a response chart to follow it.`
    } else {
      this.title.textContent = 'The frame at rest'
      this.about.textContent = 'Drag to turn it; pinch or roll to come nearer.'
    }
    this.view.canvas.setAttribute('aria-label', `The frame in three dimensions: ${this.title.textContent}. ${this.about.textContent} Arrow keys turn it, plus and minus zoom, space plays and stops, brackets change the mode.`)
  }

  /** Writes names over the picture, leaving out those that would cover others. */
  private label() {
    const taken: [number, number, number][] = [], out: Node[] = []
    for (const c of this.view.layout()) {
      if (this.view.layout().length < 2) break
      const e = html('span', { class: 'cell' }, c.caption)
      e.style.left = `${c.left + 8}px`
      e.style.top = `${c.top + 6}px`
      out.push(e)
    }
    for (const n of this.view.names().sort((a, b) => Number(a.kind !== 'axis') - Number(b.kind !== 'axis'))) {
      const half = 3.6 * n.text.length + 4
      if (taken.some(([x, y, h]) => Math.abs(x - n.x) < h + half && Math.abs(y - n.y) < 15)) continue
      taken.push([n.x, n.y, half])
      const e = html('span', { class: n.kind === 'axis' ? `axis ${n.text}` : n.kind, dir: 'auto' }, n.text)
      e.style.left = `${n.x}px`
      e.style.top = `${n.y}px`
      out.push(e)
    }
    this.overlay.replaceChildren(...out)
  }
}
