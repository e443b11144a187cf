import { benchCsv, type BenchRow } from './csv';
import { benchPages } from './pages';
import { benchPyramid } from './pyramid';
import { recalculation } from './recalculation';

/** Prints one JSON line per figure; with words behind the command only the benches of those names. */
const benches: Record<string, () => Promise<BenchRow[]>> = {
  recalculation,
  csv: benchCsv,
  pyramid: benchPyramid,
  pages: benchPages,
};

const wanted = process.argv.slice(2);
const unknown = wanted.filter((name) => !Object.hasOwn(benches, name));
if (unknown.length > 0) {
  process.stderr.write(`There is no bench “${unknown.join('”, “')}”; there are ${Object.keys(benches).join(', ')}.\n`);
  process.exit(1);
}
let failed = false;
for (const [name, bench] of Object.entries(benches)) {
  if (wanted.length > 0 && !wanted.includes(name)) continue;
  try {
    for (const row of await bench()) process.stdout.write(`${JSON.stringify(rounded(row))}\n`);
  } catch (error) {
    failed = true;
    process.stderr.write(`${name}: ${error instanceof Error ? (error.stack ?? error.message) : String(error)}\n`);
  }
}
process.exit(failed ? 1 : 0);

/** Four digits say all that a measured time holds. */
function rounded(row: BenchRow): BenchRow {
  const four = (value: number) => Number(value.toPrecision(4));
  const { ours, peer, ratio } = row;
  return {
    ...row,
    ours: four(ours),
    peer: peer === null ? null : four(peer),
    ratio: ratio === null ? null : four(ratio),
  };
}
