/**
 * Puts other texts into the same text nodes, in the order of the document: what a key changes without the work of drawing.
 * Whoever drew them draws the same texts later.
 * @returns false, and nothing is touched, where the box does not hold exactly `before`, or not as many texts
 */
export function rewriteTexts(box: Element, before: readonly string[], after: readonly string[]): boolean {
  const nodes: Text[] = []
  const walker = document.createTreeWalker(box, NodeFilter.SHOW_TEXT)
  while (walker.nextNode()) nodes.push(walker.currentNode as Text)
  if (nodes.length !== before.length || nodes.length !== after.length) return false
  if (nodes.some(({ data }, i) => data !== before[i])) return false
  for (const [i, node] of nodes.entries()) if (node.data !== after[i]) node.data = after[i]!
  return true
}
