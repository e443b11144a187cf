/**
 * Order of calculation. `dependencies[i]` are the lines that line i reads. Gives every line after what it reads, and
 * the groups of lines that read one another in a circle (Tarjan's strongly connected components, without recursion:
 * a chain of ten thousand lines is no deeper than one).
 */
export function order(dependencies: readonly (readonly number[])[]): { sequence: number[]; circles: number[][] } {
  const count = dependencies.length;
  const index = new Int32Array(count).fill(-1);
  const low = new Int32Array(count);
  const onStack = new Uint8Array(count);
  const stack: number[] = [];
  const sequence: number[] = [];
  const circles: number[][] = [];
  let next = 0;
  const enter = (node: number) => {
    index[node] = next;
    low[node] = next;
    next++;
    stack.push(node);
    onStack[node] = 1;
  };
  for (let root = 0; root < count; root++) {
    if (index[root] !== -1) continue;
    const path: { node: number; edge: number }[] = [{ node: root, edge: 0 }];
    enter(root);
    for (let top = path.at(-1); top; top = path.at(-1)) {
      const { node } = top;
      const to = dependencies[node]?.[top.edge];
      if (to !== undefined) {
        top.edge++;
        if (index[to] === -1) {
          enter(to);
          path.push({ node: to, edge: 0 });
        } else if (onStack[to]) {
          low[node] = Math.min(low[node], index[to]);
        }
        continue;
      }
      path.pop();
      const parent = path.at(-1);
      if (parent) low[parent.node] = Math.min(low[parent.node], low[node]);
      if (low[node] !== index[node]) continue;
      const members: number[] = [];
      for (;;) {
        const member = stack.pop() as number;
        onStack[member] = 0;
        members.push(member);
        if (member === node) break;
      }
      members.sort((a, b) => a - b);
      sequence.push(...members);
      if (members.length > 1 || dependencies[node]?.includes(node)) circles.push(members);
    }
  }
  return { sequence, circles };
}
