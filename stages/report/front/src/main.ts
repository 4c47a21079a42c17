// Starts the moving part of the page. Without it the page stands on its own: whatever fails here leaves that in place.

import { Chart } from './chart/chart'
import { unpack, type Mode, type Scene } from './data'
import { Companion } from './frame/companion'
import { operatingMotion } from './motion'
import { onTheme, ramp } from './palette'
import { State } from './state'
import { theme } from './theme'

declare global { var hushframe: unknown }

/** The mode that the gyro feels most. */
function loudest(scene: Scene): number {
  const felt = (m: Mode) => Math.hypot(...m.strength)
  return scene.modes!.reduce((a, b) => felt(b) > felt(a) ? b : a).number
}

/** The colour scale as a strip, wherever the page explains it. */
function strip(scene: Scene) {
  const c = ramp(scene), stops: string[] = []
  for (let k = 0; k < 256; k += 15) stops.push(`rgb(${c[4 * k]} ${c[4 * k + 1]} ${c[4 * k + 2]})`)
  document.documentElement.style.setProperty('--ramp', `linear-gradient(to right, ${stops.join(',')})`)
}

function start() {
  const holder = document.getElementById('scene-data')
  if (!holder) return
  const scene = unpack(holder.textContent!)
  const state = new State(matchMedia('(prefers-reduced-motion: reduce)').matches)
  const root = document.documentElement, host = document.getElementById('companion')
  theme()
  strip(scene)
  onTheme(() => strip(scene))
  let companion: Companion | null = null
  if (host && scene.frame) {
    root.classList.add('moving')
    try {
      companion = new Companion(host, scene, state, scene.operating.length > 0)
      const view = companion.view
      view.operating = (f, axis) => operatingMotion(scene, f, axis)
      view.density = n => {
        const d = scene.density, i = d ? d.modes.indexOf(n) : -1
        if (!d || i < 0) return null
        const nodes = scene.frame!.nodes.length / 3
        return Float32Array.from(d.levels.subarray(i * nodes, (i + 1) * nodes), v => v / 255)
      }
    } catch {
      // No 3D in this browser: the still pictures show the same.
      root.classList.remove('moving')
      host.hidden = true
      companion = null
    }
  }
  const charts = scene.charts.flatMap(c => {
    const figure = document.querySelector<HTMLElement>(`[data-chart="${CSS.escape(c.id)}"]`)
    return figure ? [new Chart(figure, c, scene, state, companion !== null && scene.operating.some(o => o.axis === c.axis))] : []
  })
  if (companion) {
    for (const e of document.querySelectorAll<HTMLElement>('[data-mode]:not(text)')) {
      const number = Number(e.dataset.mode)
      const show = () => state.set({ shown: { kind: 'mode', number }, beside: [] })
      e.classList.add('plays')
      e.addEventListener('click', show)
      state.listen(now => e.classList.toggle('is-shown', now.shown.kind === 'mode' && now.shown.number === number))
    }
    if (scene.shapes && scene.modes?.length) state.set({ shown: { kind: 'mode', number: loudest(scene) } })
  }
  // On paper nothing can be unfolded.
  let folded: HTMLDetailsElement[] = []
  addEventListener('beforeprint', () => {
    folded = [...document.querySelectorAll<HTMLDetailsElement>('main details:not([open])')]
    for (const d of folded) d.open = true
    for (const c of charts) c.draw()
  })
  addEventListener('afterprint', () => { for (const d of folded) d.open = false })
  globalThis.hushframe = { scene, state, companion, view: companion?.view, charts }
}

start()
