// Which cells of the page are out of sight: they can wait for those that the reader looks at.

/** @returns whether a cell (by its id) is known to be out of sight; one that has only just been drawn is not */
export function outOfSight(article: Element): (cell: string) => boolean {
  const away = new Set<string>();
  const idOf = (element: Element): string => (element as HTMLElement).dataset.block ?? "";
  const seen = new IntersectionObserver((entries) => {
    for (const { target, isIntersecting } of entries) { if (isIntersecting) away.delete(idOf(target)); else away.add(idOf(target)); }
  });
  const cells = (nodes: NodeList): Element[] => [...nodes].filter((node): node is Element => node instanceof Element && node.classList.contains("cell"));
  new MutationObserver((records) => {
    for (const { addedNodes, removedNodes } of records) {
      for (const cell of cells(removedNodes)) { seen.unobserve(cell); away.delete(idOf(cell)); }
      for (const cell of cells(addedNodes)) if (cell.isConnected) seen.observe(cell);
    }
  }).observe(article, { childList: true });
  return (cell) => away.has(cell);
}
