/**
 * Connected components of a graph with nodes 0 to count - 1: for each node the smallest node of its component.
 */
export function componentsOf(count: number, edges: Iterable<readonly [number, number]>): number[] {
  const parent = Array.from({ length: count }, (_, node) => node);
  const rootOf = (node: number): number => {
    let root = node;
    while (parent[root] !== root) root = parent[root];
    return root;
  };
  for (const [a, b] of edges) {
    const [low, high] = [rootOf(a), rootOf(b)].sort((x, y) => x - y);
    parent[high] = low;
  }
  return parent.map((_, node) => rootOf(node));
}
