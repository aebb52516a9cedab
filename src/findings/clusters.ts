/** Rows of a sparse table that hang together through shared columns, in the order in which a walk over them meets them. */
export function clusters(columns: readonly (readonly number[])[]): number[][] {
  const rowsOf = new Map<number, number[]>();
  columns.forEach((row, i) => row.forEach((column) => {
    const rows = rowsOf.get(column);
    if (rows) rows.push(i); else rowsOf.set(column, [i]);
  }));
  const seen = new Set<number>();
  const found: number[][] = [];
  for (let start = 0; start < columns.length; start++) {
    if (seen.has(start) || columns[start]!.length === 0) continue;
    const cluster = [start];
    seen.add(start);
    // Breadth first: neighbours stay near one another, so few columns are open at once.
    for (let at = 0; at < cluster.length; at++) {
      for (const column of columns[cluster[at]!]!) {
        for (const row of rowsOf.get(column)!) {
          if (seen.has(row)) continue;
          seen.add(row);
          cluster.push(row);
        }
      }
    }
    found.push(cluster);
  }
  return found;
}
