// Colours. The scale of displacements comes from the page, so that moving and printed pictures agree.

import type { Scene } from './data'

const query = matchMedia('(prefers-color-scheme: dark)')

/** The reader's choice, or that of the system. */
export function dark(): boolean {
  const chosen = document.documentElement.dataset.theme
  return chosen ? chosen === 'dark' : query.matches
}

export function onTheme(f: () => void) {
  query.addEventListener('change', f)
  new MutationObserver(f).observe(document.documentElement, { attributes: true, attributeFilter: ['data-theme'] })
}

export function token(name: string): string {
  return getComputedStyle(document.documentElement).getPropertyValue('--' + name).trim()
}

/** The colour scale at 256 places, red, green, blue, alpha. */
export function ramp(scene: Scene): Uint8Array {
  const steps = dark() ? scene.dark : scene.light, out = new Uint8Array(1024)
  const rgb = steps.map(s => [1, 3, 5].map(i => parseInt(s.slice(i, i + 2), 16)))
  for (let k = 0; k < 256; k++) {
    const x = k / 255 * (rgb.length - 1), i = Math.min(rgb.length - 2, Math.floor(x)), t = x - i
    for (let c = 0; c < 3; c++) out[4 * k + c] = Math.round(rgb[i][c] * (1 - t) + rgb[i + 1][c] * t)
    out[4 * k + 3] = 255
  }
  return out
}

// Hues of parts, told apart by colour-blind readers too (M. Okabe, K. Ito, Color Universal Design, 2008), softened.
const hues = ['#4f8fb8', '#d99a3d', '#3f9b7f', '#c9736b', '#8d7fb8', '#a8a24a', '#c48bb0', '#6f7f8c']

export function partColour(index: number): [number, number, number] {
  const s = hues[index % hues.length]
  return [1, 3, 5].map(i => parseInt(s.slice(i, i + 2), 16) / 255) as [number, number, number]
}
