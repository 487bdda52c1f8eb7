// Finds the circles among cells that read one another.

/** Strongly connected groups of more than one node, and nodes that read themselves; each group in the order of a walk along its reads.
 *  @param reads  for each node, the nodes that it reads
 *  Cost O(nodes + reads). Source: Tarjan (1972), without recursion so that a long chain cannot overflow the stack. */
export function circles(reads: readonly (readonly number[])[]): number[][] {
  const order = new Int32Array(reads.length).fill(-1);
  const low = new Int32Array(reads.length);
  const inStack = new Uint8Array(reads.length);
  const stack: number[] = [];
  const found: number[][] = [];
  let count = 0;
  for (let root = 0; root < reads.length; root += 1) {
    if (order[root] >= 0) continue;
    const path: { node: number; next: number }[] = [{ node: root, next: 0 }];
    while (path.length > 0) {
      const here = path[path.length - 1];
      const { node } = here;
      if (here.next === 0) { order[node] = low[node] = count; count += 1; stack.push(node); inStack[node] = 1; }
      if (here.next < reads[node].length) {
        const next = reads[node][here.next];
        here.next += 1;
        if (order[next] < 0) path.push({ node: next, next: 0 });
        else if (inStack[next] === 1) low[node] = Math.min(low[node], order[next]);
        continue;
      }
      path.pop();
      const above = path.at(-1);
      if (above !== undefined) low[above.node] = Math.min(low[above.node], low[node]);
      if (low[node] !== order[node]) continue;
      const group: number[] = [];
      for (let each = -1; each !== node;) { each = stack.pop() ?? node; inStack[each] = 0; group.push(each); }
      if (group.length > 1 || reads[node].includes(node)) found.push(along(group, reads));
    }
  }
  return found;
}

/** The shortest way round from the group's first node back to itself, for a message. */
function along(group: readonly number[], reads: readonly (readonly number[])[]): number[] {
  const start = Math.min(...group);
  const inside = new Set(group);
  const from = new Map<number, number>();
  const queue = [start];
  for (let node = queue.shift(); node !== undefined; node = queue.shift()) {
    for (const next of reads[node]) {
      if (!inside.has(next)) continue;
      if (next === start) {
        const way = [node];
        for (let back = node; back !== start;) { back = from.get(back) ?? start; way.unshift(back); }
        return [...way, ...group.filter((each) => !way.includes(each))];
      }
      if (!from.has(next)) { from.set(next, node); queue.push(next); }
    }
  }
  return [...group];
}
