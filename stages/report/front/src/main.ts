// Starts the moving part of the page. Without it the page stands on its own: whatever fails here leaves that in place.

import { unpack, type Mode, type Scene } from './data'
import { View } from './frame/view'
import { State } from './state'

declare global { var hushframe: unknown }

/** The mode that the gyro feels most. */
function loudest(scene: Scene): number {
  const felt = (m: Mode) => Math.hypot(...m.strength)
  return scene.modes!.reduce((a, b) => felt(b) > felt(a) ? b : a).number
}

function start() {
  const holder = document.getElementById('scene-data')
  if (!holder) return
  const scene = unpack(holder.textContent!)
  const root = document.documentElement
  const state = new State(matchMedia('(prefers-reduced-motion: reduce)').matches)
  const stageHost = document.getElementById('frame-stage')
  let view: View | null = null
  if (stageHost && scene.frame) {
    try {
      view = new View(stageHost, scene, state)
      root.classList.add('moving')
    } catch (e) {
      stageHost.textContent = 'This browser draws no 3D pictures; the still ones below show the same.'
    }
  }
  if (view && scene.shapes && scene.modes?.length) state.set({ shown: { kind: 'mode', number: loudest(scene) } })
  globalThis.hushframe = { scene, state, view }
}

start()
