import type { EntryDto, PersonDto } from '@/lib/schemas/entry';

export type People = { names: Record<string, string>; initials: Record<string, string> };

/** Everyone who may have written in this entry, by id. */
export function peopleOf(entry: EntryDto, person: PersonDto | null): People {
  const all = [
    entry.author,
    ...entry.contributors,
    ...(entry.head ? [entry.head.createdBy] : []),
    ...(person ? [person] : []),
  ];
  return {
    names: Object.fromEntries(all.map(({ id, name }) => [id, name])),
    initials: Object.fromEntries(all.map(({ id, initials }) => [id, initials])),
  };
}
