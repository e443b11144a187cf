import { TableCell, TableHeader } from '@tiptap/extension-table';

/** A cell that spans more is cut to this: laying out one of a million columns holds a browser for a minute. */
export const widestSpan = 64;

const span = (name: 'colspan' | 'rowspan') => ({
  default: 1,
  validate: (value: unknown) => {
    if (typeof value !== 'number' || !Number.isInteger(value) || value < 1 || value > widestSpan) {
      throw new RangeError(`attribute “${name}”: a whole number from 1 to ${widestSpan}`);
    }
  },
  parseHTML: (element: HTMLElement) => {
    const stated = Number.parseInt(element.getAttribute(name) ?? '1', 10);
    return Number.isFinite(stated) ? Math.min(Math.max(stated, 1), widestSpan) : 1;
  },
});

export const tableCell = TableCell.extend({
  addAttributes() {
    return { ...this.parent?.(), colspan: span('colspan'), rowspan: span('rowspan') };
  },
});

export const tableHeader = TableHeader.extend({
  addAttributes() {
    return { ...this.parent?.(), colspan: span('colspan'), rowspan: span('rowspan') };
  },
});
