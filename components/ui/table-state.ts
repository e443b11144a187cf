/** What a table shows, kept in the address: sort column and direction, filter text, hidden columns. */
export type TableState = { sort: string | null; descending: boolean; filter: string; hidden: string[] };

export function readTableState(query: URLSearchParams): TableState {
  const [sort, direction] = (query.get('sort') ?? '').split('.');
  return {
    sort: sort || null,
    descending: direction === 'down',
    filter: query.get('filter') ?? '',
    hidden: (query.get('hide') ?? '').split(',').filter(Boolean),
  };
}

export function writeTableState(state: TableState): string {
  const query = new URLSearchParams();
  if (state.sort) query.set('sort', `${state.sort}.${state.descending ? 'down' : 'up'}`);
  if (state.filter) query.set('filter', state.filter);
  if (state.hidden.length > 0) query.set('hide', state.hidden.join(','));
  return query.toString();
}

export type CellValue = string | number | null;

/** Numbers by size, texts with their numbers by size too (leaf 9 before leaf 10); missing values last, whichever the direction. */
export function compareCells(a: CellValue, b: CellValue, descending: boolean): number {
  if (a === null || a === '') return b === null || b === '' ? 0 : 1;
  if (b === null || b === '') return -1;
  const order =
    typeof a === 'number' && typeof b === 'number'
      ? a - b
      : String(a).localeCompare(String(b), 'en', { numeric: true });
  return descending ? -order : order;
}

/** Every word of the filter must occur somewhere in the row. */
export function rowMatches(cells: CellValue[], filter: string): boolean {
  const text = cells
    .map((cell) => String(cell ?? ''))
    .join('\u0001')
    .toLowerCase();
  return filter
    .toLowerCase()
    .split(/\s+/)
    .every((word) => text.includes(word));
}
