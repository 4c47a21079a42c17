// The moving frame: one canvas, one or several cells with a common camera.

import * as three from 'three'
import { OrbitControls } from 'three/addons/controls/OrbitControls.js'
import type { Frame, Scene } from '../data'
import { modeMotion, type Motion } from '../motion'
import { onTheme, ramp, token } from '../palette'
import type { Choices, State } from '../state'
import { Bodies, Triad, axisNames } from './bodies'
import { colour, glass, surface } from './paint'
import { Solid, restOutline } from './solid'

export interface Look { name: string; from: [number, number, number] }
/** Where the camera may stand, seen from the middle of the frame. */
export const looks: Look[] = [
  { name: 'from behind', from: [-0.72, -0.5, 0.62] },
  { name: 'from above', from: [-0.001, 0, 1] },
  { name: 'from the right', from: [0, -1, 0.001] },
  { name: 'from the front', from: [1, 0, 0.12] },
]

interface Cell { solid: Solid; bodies: Bodies; triad: Triad; scene: three.Scene; motion: Motion | null; caption: string }

export class View {
  readonly canvas: HTMLCanvasElement
  private renderer: three.WebGLRenderer
  private camera = new three.PerspectiveCamera(28, 1, 0.01, 50)
  private controls: OrbitControls
  private cells: Cell[] = []
  private material: three.ShaderMaterial
  private fill = glass(0.32)
  private rim = new three.LineBasicMaterial({ transparent: true, opacity: 0.55 })
  private bodyLine = new three.LineBasicMaterial({ transparent: true, opacity: 0.7 })
  private restLine = new three.LineBasicMaterial({ transparent: true, opacity: 0.85 })
  private trackLine = new three.LineBasicMaterial({ transparent: true, opacity: 0.5, depthTest: false })
  private axes = [0, 1, 2].map(() => new three.MeshBasicMaterial({ depthTest: false, transparent: true }))
  private rampTexture: three.DataTexture
  private rest: three.BufferGeometry
  private frame: Frame
  readonly span: number
  private middle = new three.Vector3()
  private radius: number
  private box = new three.Box3()
  private aspect = 1
  phase = 0
  frames = 0 // drawn so far
  private last = 0
  private wanted = true
  private onScreen = true
  /** Gives the operating motion at a frequency, where there is one. */
  operating: (frequency: number, axis: string) => Motion | null = () => null
  /** Strain energy density at the nodes of a mode, 0 to 1, where it is known. */
  density: (mode: number) => Float32Array | null = () => null
  /** Called after every frame drawn. */
  after: (() => void)[] = []

  constructor(private host: HTMLElement, private data: Scene, private state: State) {
    this.frame = data.frame!
    this.canvas = document.createElement('canvas')
    this.renderer = new three.WebGLRenderer({ canvas: this.canvas, antialias: true, alpha: true, preserveDrawingBuffer: true })
    this.renderer.setPixelRatio(Math.min(devicePixelRatio || 1, 2))
    this.renderer.autoClear = false
    this.renderer.outputColorSpace = three.LinearSRGBColorSpace // colours are chosen as they are shown
    host.append(this.canvas)

    const box = this.box, p = new three.Vector3(), x = this.frame.nodes
    for (let k = 0; k < x.length; k += 3) box.expandByPoint(p.set(x[k], x[k + 1], x[k + 2]))
    for (const b of this.frame.bodies)
      for (const s of [-1, 1]) box.expandByPoint(p.set(b.centre[0] + s * b.half[0], b.centre[1] + s * b.half[1], b.centre[2] + s * b.half[2]))
    const size = box.getSize(new three.Vector3())
    this.span = Math.max(size.x, size.y, size.z) || 1
    this.radius = size.length() / 2 || 1
    box.getCenter(this.middle)

    this.rampTexture = new three.DataTexture(ramp(data), 256, 1)
    this.rampTexture.magFilter = this.rampTexture.minFilter = three.LinearFilter
    this.rampTexture.needsUpdate = true
    this.material = surface(this.rampTexture, this.span)
    this.rest = restOutline(this.frame)
    this.camera.up.set(0, 0, 1)
    this.controls = new OrbitControls(this.camera, this.canvas)
    this.controls.enableDamping = false
    this.controls.zoomToCursor = true
    this.controls.addEventListener('change', () => this.draw())
    this.paint()
    onTheme(() => this.paint())
    this.look(looks[0])
    this.arrange(state.now, null)
    state.listen((now, before) => this.arrange(now, before))
    new ResizeObserver(() => this.resize()).observe(host)
    this.resize()
    if ('IntersectionObserver' in window)
      new IntersectionObserver(e => { this.onScreen = e[e.length - 1].isIntersecting; this.draw() }).observe(host)
    const tick = (time: number) => {
      requestAnimationFrame(tick)
      this.step(time)
    }
    this.render()
    requestAnimationFrame(tick)
  }

  /** Turns the camera to a look and fits the frame. */
  look(l: Look) {
    const d = new three.Vector3(...l.from).normalize()
    const width = Math.max(1, this.host.clientWidth), height = Math.max(1, this.host.clientHeight)
    const [columns, rows] = this.grid(), aspect = (width / columns) / (height / rows)
    const distance = this.distance(d, aspect)
    this.controls.target.copy(this.middle)
    this.camera.position.copy(this.middle).addScaledVector(d, distance)
    this.camera.near = distance / 100
    this.camera.far = distance * 20
    this.controls.minDistance = this.radius * 0.3
    this.controls.maxDistance = distance * 6
    this.camera.updateProjectionMatrix()
    this.controls.update()
    this.draw()
  }

  /** How far the camera must be for all corners of the frame to be seen, with room for the motion. */
  private distance(d: three.Vector3, aspect: number): number {
    const right = new three.Vector3().crossVectors(this.camera.up, d).normalize()
    if (right.lengthSq() < 0.5) right.set(0, -1, 0)
    const up = new three.Vector3().crossVectors(d, right), tan = Math.tan(this.camera.fov / 2 * Math.PI / 180), corner = new three.Vector3()
    let out = this.radius * 0.5
    for (let n = 0; n < 8; n++) {
      corner.set(n & 1 ? this.box.max.x : this.box.min.x, n & 2 ? this.box.max.y : this.box.min.y, n & 4 ? this.box.max.z : this.box.min.z).sub(this.middle)
      out = Math.max(out, Math.abs(corner.dot(up)) / tan + corner.dot(d), Math.abs(corner.dot(right)) / (tan * aspect) + corner.dot(d))
    }
    return 1.12 * out
  }

  /** Fits the frame again, seen from where the camera is. */
  refit() {
    const d = this.camera.position.clone().sub(this.controls.target)
    this.look({ name: '', from: [d.x, d.y, d.z] })
  }

  /** Turns the camera by angles, for the keyboard. */
  orbit(right: number, up: number) {
    const offset = this.camera.position.clone().sub(this.controls.target), s = new three.Spherical()
    const z = new three.Quaternion().setFromUnitVectors(this.camera.up, new three.Vector3(0, 1, 0))
    s.setFromVector3(offset.applyQuaternion(z))
    s.theta += right
    s.phi = Math.min(Math.PI - 0.01, Math.max(0.01, s.phi - up))
    this.camera.position.copy(this.controls.target).add(offset.setFromSpherical(s).applyQuaternion(z.invert()))
    this.controls.update()
    this.draw()
  }
  zoom(factor: number) {
    const offset = this.camera.position.clone().sub(this.controls.target)
    const l = Math.min(this.controls.maxDistance, Math.max(this.controls.minDistance, offset.length() * factor))
    this.camera.position.copy(this.controls.target).add(offset.setLength(l))
    this.controls.update()
    this.draw()
  }

  private grid(): [number, number] {
    const n = Math.max(1, this.cells.length)
    if (n === 1) return [1, 1]
    const wide = this.host.clientWidth >= this.host.clientHeight * 1.4
    return n === 2 ? (wide ? [2, 1] : [1, 2]) : [2, Math.ceil(n / 2)]
  }

  private paint() {
    const ink = colour(token('ink')), quiet = colour(token('quiet')), pixels = this.rampTexture.image.data as Uint8Array
    pixels.set(ramp(this.data))
    this.rampTexture.needsUpdate = true
    this.material.uniforms.ink.value = ink
    this.material.uniforms.plain.value = colour(token('plate'))
    this.fill.uniforms.plain.value = colour(token('body'))
    this.rim.color = ink
    this.bodyLine.color = quiet
    this.restLine.color = colour(token('rest'))
    this.trackLine.color = quiet
    axisNames.forEach((name, d) => { this.axes[d].color = colour(token(name)) })
    this.draw()
  }

  /** Follows the reader's choices. */
  private arrange(now: Choices, before: Choices | null) {
    const same = before && before.shown === now.shown && before.beside === now.beside && before.colouring === now.colouring
    this.material.uniforms.lines.value = now.nodeLines
    if (!same) {
      const wanted: { motion: Motion | null; mode: number; caption: string }[] =
        now.beside.length > 1
          ? now.beside.map(n => ({ motion: modeMotion(this.data, n), mode: n, caption: this.modeName(n) }))
          : [this.single(now)]
      while (this.cells.length > wanted.length) {
        const cell = this.cells.pop()!
        cell.solid.dispose()
      }
      while (this.cells.length < wanted.length) this.cells.push(this.cell())
      const restOnly = wanted.every(w => !w.motion)
      const strain = now.colouring === 'strain'
      this.cells.forEach((cell, k) => {
        cell.motion = wanted[k].motion
        cell.caption = wanted[k].caption
        cell.solid.dress(cell.motion, strain && wanted[k].mode > 0 ? this.density(wanted[k].mode) : null)
      })
      this.material.uniforms.colouring.value = restOnly ? 1 : now.colouring === 'part' ? 1 : 0
      if (before && before.beside.length !== now.beside.length) this.refit()
    }
    for (const cell of this.cells) {
      cell.scene.getObjectByName('rest')!.visible = now.rest && cell.motion !== null
      cell.triad.group.userData.wanted = now.gyro
    }
    this.draw()
  }

  private single(now: Choices) {
    switch (now.shown.kind) {
      case 'mode': return { motion: modeMotion(this.data, now.shown.number), mode: now.shown.number, caption: this.modeName(now.shown.number) }
      case 'frequency': return { motion: this.operating(now.shown.frequency, now.shown.axis), mode: 0, caption: `as driven, ${now.shown.frequency.toFixed(1)} Hz` }
      default: return { motion: null, mode: 0, caption: 'at rest' }
    }
  }
  private modeName(n: number) {
    const m = this.data.modes?.find(m => m.number === n)
    return m ? `mode ${n}, ${m.frequency.toFixed(1)} Hz` : `mode ${n}`
  }

  private cell(): Cell {
    const scene = new three.Scene(), solid = new Solid(this.frame, this.material, this.rim), bodies = new Bodies(this.frame, this.fill, this.bodyLine)
    const rest = new three.LineSegments(this.rest, this.restLine)
    rest.name = 'rest'
    const triad = new Triad(this.frame, this.span, this.axes, this.trackLine)
    scene.add(rest, solid.mesh, solid.rims, bodies.group, triad.group)
    return { scene, solid, bodies, triad, motion: null, caption: '' }
  }

  /** Asks for a picture at the next chance. */
  draw() { this.wanted = true }

  private resize() {
    const w = Math.max(1, this.host.clientWidth), h = Math.max(1, this.host.clientHeight)
    this.renderer.setSize(w, h, false)
    if (Math.abs(w / h - this.aspect) > 0.05 * this.aspect) {
      this.aspect = w / h
      this.refit()
    }
    this.draw()
  }

  private step(time: number) {
    const dt = Math.min(0.1, (time - this.last) / 1000)
    this.last = time
    const moving = this.state.now.playing && this.onScreen && this.cells.some(c => c.motion)
    if (moving) this.phase = (this.phase + 2 * Math.PI * this.state.now.speed * dt) % (2 * Math.PI)
    if (moving || this.wanted) this.render()
  }

  render() {
    this.wanted = false
    this.frames++
    const w = this.host.clientWidth, h = this.host.clientHeight
    if (w < 1 || h < 1) return
    const [columns, rows] = this.grid()
    this.camera.aspect = (w / columns) / (h / rows)
    this.camera.updateProjectionMatrix()
    this.renderer.setScissorTest(false)
    this.renderer.clear()
    this.renderer.setScissorTest(true)
    this.cells.forEach((cell, k) => {
      const scale = cell.motion && cell.motion.largest > 0 ? this.state.now.amplitude * this.span / cell.motion.largest : 0
      cell.solid.move(cell.motion, scale, this.phase)
      cell.bodies.move(cell.motion, scale, this.phase)
      cell.triad.move(cell.motion, scale, this.phase, this.span)
      if (!cell.triad.group.userData.wanted) cell.triad.group.visible = false
      const x = k % columns, y = Math.floor(k / columns)
      const left = x * w / columns, bottom = h - (y + 1) * h / rows
      this.renderer.setViewport(left, bottom, w / columns, h / rows)
      this.renderer.setScissor(left, bottom, w / columns, h / rows)
      this.renderer.render(cell.scene, this.camera)
    })
    for (const f of this.after) f()
  }

  /** Cells with their place on the host in pixels. */
  layout(): { caption: string; left: number; top: number; width: number; height: number; motion: Motion | null }[] {
    const [columns, rows] = this.grid(), w = this.host.clientWidth / columns, h = this.host.clientHeight / rows
    return this.cells.map((c, k) => ({ caption: c.caption, left: (k % columns) * w, top: Math.floor(k / columns) * h, width: w, height: h, motion: c.motion }))
  }

  /** Where a point of the frame is on the host; null behind the camera. */
  private onHost(p: three.Vector3, k: number): [number, number] | null {
    const q = p.clone().project(this.camera)
    if (q.z > 1) return null
    const c = this.layout()[k]
    return [c.left + (q.x + 1) / 2 * c.width, c.top + (1 - q.y) / 2 * c.height]
  }

  /** Names with their places: parts and bodies at their middle, axes of the triad at their tips. */
  names(): { text: string; kind: 'part' | 'body' | 'axis'; x: number; y: number; axis?: number }[] {
    const out: ReturnType<View['names']> = [], p = new three.Vector3()
    this.cells.forEach((cell, k) => {
      if (this.state.now.names && k === 0) {
        for (const part of this.frame.parts) {
          const list = part.standoff ? part.lines : part.triangles
          p.set(0, 0, 0)
          for (const n of list) p.add(new three.Vector3(cell.solid.places[3 * n], cell.solid.places[3 * n + 1], cell.solid.places[3 * n + 2]))
          const at = this.onHost(p.divideScalar(Math.max(1, list.length)), k)
          if (at) out.push({ text: part.name, kind: 'part', x: at[0], y: at[1] })
        }
        for (const b of this.frame.bodies) {
          const at = this.onHost(p.set(...b.centre), k)
          if (at) out.push({ text: b.name, kind: 'body', x: at[0], y: at[1] })
        }
      }
      if (cell.triad.group.visible)
        axisNames.forEach((name, d) => {
          if (cell.triad.shares[d] < 0.08) return
          const at = this.onHost(cell.triad.tips[d], k)
          if (at) out.push({ text: name, kind: 'axis', axis: d, x: at[0], y: at[1] })
        })
    })
    return out
  }

  /** The name of what lies under a place of the host. */
  under(x: number, y: number): string {
    for (const [k, c] of this.layout().entries()) {
      if (x < c.left || y < c.top || x >= c.left + c.width || y >= c.top + c.height) continue
      const ray = new three.Raycaster()
      ray.setFromCamera(new three.Vector2((x - c.left) / c.width * 2 - 1, 1 - (y - c.top) / c.height * 2), this.camera)
      const cell = this.cells[k]
      cell.solid.geometry.boundingSphere = null
      const plate = ray.intersectObject(cell.solid.mesh)[0], body = ray.intersectObject(cell.bodies.group).find(i => i.object.name !== '')
      if (plate && (!body || plate.distance <= body.distance * 1.001)) {
        const part = this.frame.parts[cell.solid.partOf[plate.faceIndex!]]
        return `${part.standoff ? 'standoff' : 'plate'} ${part.name}`
      }
      return body ? body.object.name : ''
    }
    return ''
  }

  /** Displaced places of the nodes of a cell, for those who look under the hood. */
  places(k = 0): Float32Array { return this.cells[k].solid.places.slice() }
  motion(k = 0): Motion | null { return this.cells[k]?.motion ?? null }
}
