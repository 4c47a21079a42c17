// Light, dark, or as the system has it. The choice lasts while the page is open: a file from disk keeps nothing.

import { button } from './chart/svg'

export function theme() {
  const place = document.getElementById('theme')
  if (!place) return
  const order = ['', 'light', 'dark'] as const, words = ['as the system', 'light', 'dark']
  let k = 0
  const b = button('', '', () => {
    k = (k + 1) % order.length
    if (order[k]) document.documentElement.dataset.theme = order[k]
    else delete document.documentElement.dataset.theme
    say()
  })
  const say = () => { b.textContent = `paper: ${words[k]}`; b.title = 'change between light and dark paper'; b.setAttribute('aria-label', `${b.title}; now ${words[k]}`) }
  say()
  place.append(b)
}
