/**
 * The text nodes of an element in the order of the document, without what stands in dialogs: for texts that a key changes
 * without the work of drawing. Who drew them draws the same texts later.
 */
export function textNodes(box: Element): Text[] {
  const nodes: Text[] = []
  const walker = document.createTreeWalker(box, NodeFilter.SHOW_TEXT)
  while (walker.nextNode()) {
    const node = walker.currentNode as Text
    if (!node.parentElement?.closest('[role=dialog]')) nodes.push(node)
  }
  return nodes
}

/** Writes only where the text is another. */
export function putTexts(nodes: readonly Text[], texts: readonly string[]): void {
  for (const [i, node] of nodes.entries()) if (node.data !== texts[i]) node.data = texts[i]!
}
