// Saving what a chart shows: as a picture that looks the same anywhere, or as its numbers.

import type { ChartData } from '../data'
import { token } from '../palette'

export function download(name: string, content: Blob) {
  const a = document.createElement('a')
  a.href = URL.createObjectURL(content)
  a.download = name
  document.body.append(a)
  a.click()
  a.remove()
  setTimeout(() => URL.revokeObjectURL(a.href), 10_000)
}

const carried = ['fill', 'fill-opacity', 'stroke', 'stroke-width', 'stroke-dasharray', 'stroke-linejoin', 'opacity', 'paint-order', 'font-family', 'font-size', 'font-weight', 'text-anchor']

/** The picture as text, with every style written into it, on the paper of the page. */
export function standalone(picture: SVGSVGElement): string {
  const copy = picture.cloneNode(true) as SVGSVGElement
  const from = picture.querySelectorAll('*'), to = copy.querySelectorAll('*')
  from.forEach((e, i) => {
    const style = getComputedStyle(e), target = to[i] as SVGElement
    for (const key of carried) {
      const value = style.getPropertyValue(key)
      if (value && !(target.getAttribute(key) ?? '').startsWith('url(')) target.setAttribute(key, value)
    }
    target.removeAttribute('class')
    target.removeAttribute('tabindex')
  })
  copy.querySelectorAll('.cursor, [data-overlay]').forEach(e => e.remove())
  const width = picture.viewBox.baseVal.width, height = picture.viewBox.baseVal.height
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg')
  copy.setAttribute('width', String(width))
  copy.setAttribute('height', String(height))
  copy.removeAttribute('class')
  const paper = document.createElementNS('http://www.w3.org/2000/svg', 'rect')
  for (const [k, v] of Object.entries({ width: String(width), height: String(height), fill: token('card') })) paper.setAttribute(k, v)
  copy.prepend(paper)
  return new XMLSerializer().serializeToString(copy)
}

export function saveSVG(picture: SVGSVGElement, name: string) {
  download(name + '.svg', new Blob([standalone(picture)], { type: 'image/svg+xml' }))
}

export async function savePNG(picture: SVGSVGElement, name: string) {
  const address = URL.createObjectURL(new Blob([standalone(picture)], { type: 'image/svg+xml' }))
  const image = new Image()
  await new Promise((done, failed) => { image.onload = done; image.onerror = failed; image.src = address })
  const canvas = document.createElement('canvas')
  canvas.width = 2 * picture.viewBox.baseVal.width
  canvas.height = 2 * picture.viewBox.baseVal.height
  canvas.getContext('2d')!.drawImage(image, 0, 0, canvas.width, canvas.height)
  URL.revokeObjectURL(address)
  canvas.toBlob(b => b && download(name + '.png', b), 'image/png')
}

/** A field of comma-separated values; what a spreadsheet would take for a formula stays text. */
export function field(s: string): string {
  if (/^[=+\-@\t\r]/.test(s) && !Number.isFinite(Number(s))) s = "'" + s
  return /[",\n\r]/.test(s) ? '"' + s.replaceAll('"', '""') + '"' : s
}

/** All numbers of a chart, whatever part of it is shown. */
export function csv(data: ChartData): string {
  const out: string[] = []
  const number = (x: number) => Number.isFinite(x) ? String(Number(x.toPrecision(8))) : ''
  out.push(['series', data.x.label, data.y.label, 'lower bound', 'upper bound'].map(field).join(','))
  for (const c of data.curves)
    for (let k = 0; k < c.x.length; k++)
      out.push([field(c.name), number(c.x[k]), number(c.y[k]), c.lower ? number(c.lower[k]) : '', c.upper ? number(c.upper[k]) : ''].join(','))
  for (const p of data.points) out.push([field(p.about || p.class), number(p.x), number(p.y), '', ''].join(','))
  if (data.grid) {
    out.length = 0
    const g = data.grid, columns = g.x.length - 1
    out.push([data.x.label, data.y.label, g.label].map(field).join(','))
    for (let row = 0; row + 1 < g.y.length; row++)
      for (let k = 0; k < columns; k++) {
        const level = g.cells[row * columns + k]
        if (level) out.push([number((g.x[k] + g.x[k + 1]) / 2), number((g.y[row] + g.y[row + 1]) / 2), number(g.low * (g.high / g.low) ** ((level - 1) / 254))].join(','))
      }
  }
  return out.join('\n') + '\n'
}

export function saveCSV(data: ChartData) {
  download(data.id + '.csv', new Blob([csv(data)], { type: 'text/csv' }))
}
