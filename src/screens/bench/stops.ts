/** Places of the page that a key or an act moves the focus to. */
export function findStop(stop: string): HTMLElement | null {
  const [kind, row] = stop.split('-')
  if (kind === 'cell')
    return document.querySelector<HTMLElement>(`main [data-cell="${Number(row)}-measured"]`)
  return document.querySelector<HTMLElement>('main [data-field="unit"]')
}
