import { expect, it } from 'vitest';
import { compareCells, readTableState, rowMatches, writeTableState } from './table-state';

it('keeps its state in the address and reads it back', () => {
  const state = { sort: 'leaf', descending: true, filter: 'escape over', hidden: ['author'] };
  expect(readTableState(new URLSearchParams(writeTableState(state)))).toEqual(state);
});

it('sorts numbers inside texts by size and missing values last in both directions', () => {
  expect(['leaf 10', 'leaf 9', null].sort((a, b) => compareCells(a, b, false))).toEqual(['leaf 9', 'leaf 10', null]);
  expect(['leaf 9', null, 'leaf 10'].sort((a, b) => compareCells(a, b, true))).toEqual(['leaf 10', 'leaf 9', null]);
});

it('wants every word of the filter, wherever it stands in the row', () => {
  expect(rowMatches(['Escape', 'Tern 24'], 'tern esc')).toBe(true);
  expect(rowMatches(['Escape', 'Tern 24'], 'tern brine')).toBe(false);
});
