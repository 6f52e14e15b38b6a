import { lightColours } from './light-colours.ts'

const onlyOnThePage = ['tabindex', 'data-stop', 'class', 'style']

/** The drawing as a file of its own: light colours written out, white ground, nothing that only the page needs. */
export function svgText(svg: SVGSVGElement): string {
  const copy = svg.cloneNode(true) as SVGSVGElement
  for (const element of [copy, ...copy.querySelectorAll('*')]) {
    for (const name of onlyOnThePage) element.removeAttribute(name)
    for (const { name, value } of [...element.attributes]) {
      if (value.includes('var(')) element.setAttribute(name, withColours(value))
    }
  }
  const ground = document.createElementNS('http://www.w3.org/2000/svg', 'rect')
  ground.setAttribute('width', '100%')
  ground.setAttribute('height', '100%')
  ground.setAttribute('fill', '#ffffff')
  copy.insertBefore(ground, copy.firstChild)
  return new XMLSerializer().serializeToString(copy)
}

const withColours = (value: string): string =>
  value
    .replaceAll('var(--paper)', '#ffffff')
    .replace(/var\(--([\w-]+)\)/g, (whole, name: string) => lightColours[name] ?? whole)

/** RFC 4180 with numbers as they are: every double comes back the same (quality.md, U9). */
export function csvText(
  head: readonly string[],
  rows: readonly (readonly (number | string | null)[])[],
): string {
  const cell = (value: number | string | null): string => {
    if (value === null) return ''
    const text = String(value)
    return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text
  }
  return [head, ...rows].map((row) => `${row.map(cell).join(',')}\r\n`).join('')
}
