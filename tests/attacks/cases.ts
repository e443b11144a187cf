/** Where each numbered case of the hardening list is proven. `cases.test.ts` sees that the named file has a test of that number. */

const accounts = 'attacks/01-13-accounts.test.ts';
const access = 'attacks/20-30-access.test.ts';
const signing = 'attacks/31-50-signing.test.ts';
const requests = 'attacks/51-57-requests.test.ts';
const overHttp = 'attacks/over-http.test.ts';
const documents = 'attacks/63-67-hostile-documents.test.ts';
const equations = 'attacks/68-71-equations.test.ts';
const files = 'attacks/79-83-hostile-files.test.ts';
const folder = 'faults/10-database-folder.test.ts';
const serverFaults = 'faults/02-17-server.test.ts';
const drafts = 'faults/23-30-browser-drafts.test.ts';
const received = 'faults/34-35-38-received-bytes.test.ts';

const each = (file: string, ...numbers: number[]) => Object.fromEntries(numbers.map((number) => [number, file]));

export const attackCases: Record<number, string> = {
  ...each(accounts, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13),
  ...each(overHttp, 15, 16, 17, 18, 22, 58, 60, 72, 73),
  ...each(access, 20, 21, 23, 24, 25, 26, 27, 28, 29, 30),
  ...each(signing, 31, 32, 34, 35, 36, 38, 39, 40, 41, 42, 43, 46, 50),
  ...each(requests, 51, 52, 53, 54, 55, 56, 57, 98, 104, 105, 106),
  ...each('attacks/62-link-disguises.test.ts', 62),
  ...each(documents, 63, 64, 65, 67),
  ...each('attacks/66-hostile-paste.test.ts', 66),
  ...each(equations, 68, 69, 70, 71),
  ...each(files, 79, 80, 81, 82, 83),
  ...each('attacks/90-hostile-text.test.ts', 90),
  ...each('attacks/92-more-than-declared.test.ts', 92),
  ...each('attacks/93-quota-and-full-disk.test.ts', 93),
  ...each('attacks/94-bodies-over-10-mb.test.ts', 94),
  ...each('attacks/95-digest-that-does-not-match.test.ts', 95),
  ...each('attacks/101-expression-engine.test.ts', 101),
};

export const faultCases: Record<number, string> = {
  ...each('faults/01-kill-while-saving.test.ts', 1),
  ...each(serverFaults, 2, 11, 12, 17),
  ...each(folder, 10),
  ...each(overHttp, 21),
  ...each(drafts, 23, 24, 25, 26, 27, 28, 29, 30),
  ...each('faults/33-upload-cut.test.ts', 33),
  ...each(received, 34, 35, 38),
  ...each('faults/36-server-restarted-midway.test.ts', 36),
  ...each('faults/39-names-nfc-nfd.test.ts', 39),
};
