// Elements of pictures. Words always go in as text, never as markup.

type Attributes = Record<string, string | number | undefined>

export function svg<K extends keyof SVGElementTagNameMap>(name: K, attributes: Attributes = {}, ...children: (Node | string)[]): SVGElementTagNameMap[K] {
  const e = document.createElementNS('http://www.w3.org/2000/svg', name)
  for (const [key, value] of Object.entries(attributes)) if (value !== undefined) e.setAttribute(key, typeof value === 'number' ? String(Math.round(value * 10) / 10) : value)
  e.append(...children)
  return e
}

export function html<K extends keyof HTMLElementTagNameMap>(name: K, attributes: Record<string, string | undefined> = {}, ...children: (Node | string)[]): HTMLElementTagNameMap[K] {
  const e = document.createElement(name)
  for (const [key, value] of Object.entries(attributes)) if (value !== undefined) e.setAttribute(key, value)
  e.append(...children)
  return e
}

export function button(text: string, title: string, press: () => void): HTMLButtonElement {
  const b = html('button', { type: 'button', title, 'aria-label': title }, text)
  b.addEventListener('click', press)
  return b
}

/** A number in a few significant digits, with a proper minus and powers of ten. */
export function digits(x: number, n = 3): string {
  if (!Number.isFinite(x)) return '–'
  if (x === 0) return '0'
  const e = Math.floor(Math.log10(Math.abs(x)) + 1e-12)
  if (e < -3 || e > 5) {
    const [mantissa, power] = x.toExponential(n - 1).split('e')
    return mantissa.replace('-', '−') + '·10' + [...String(Number(power))].map(c => '⁰¹²³⁴⁵⁶⁷⁸⁹'['0123456789'.indexOf(c)] ?? '⁻').join('')
  }
  return x.toFixed(Math.max(0, n - 1 - e)).replace('-', '−')
}
