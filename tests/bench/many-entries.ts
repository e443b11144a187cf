import { PGlite } from '@electric-sql/pglite';
import path from 'node:path';

/**
 * Adds a notebook of `count` entries, each with a draft of some sixty words, to the database of a server that is stopped,
 * by SQL: through the application a hundred thousand would take an hour. `tomas` is its author. Gives the id of one entry.
 */
export async function addNotebook(dataDir: string, code: string, count: number): Promise<string> {
  const pg = new PGlite(path.join(dataDir, 'pg'));
  try {
    await pg.waitReady;
    // Without triggers: neither journal nor log hold these rows, which are for measuring alone.
    await pg.exec('SET session_replication_role = replica');
    const { rows: people } = await pg.query<{ id: string }>(
      `SELECT id FROM "user" WHERE email = 'tomas@fjordheim.example'`,
    );
    const author = people[0]?.id;
    if (!author) throw new Error('The demonstration has no Tomas.');
    const { rows } = await pg.query<{ id: string }>(
      `INSERT INTO notebook (id, code, title, next_leaf, created_by)
       VALUES (gen_random_uuid(), $1, 'For measuring', $2, $3) RETURNING id`,
      [code, count + 1, author],
    );
    const book = rows[0]!.id;
    await pg.query(`INSERT INTO notebook_member (notebook_id, user_id, role) VALUES ($1, $2, 'author')`, [
      book,
      author,
    ]);
    // Words by number, so that some are in every entry, some in one of ten, and one (`run` with its number) in one only.
    await pg.query(
      `INSERT INTO entry (id, notebook_id, leaf, title, work_date, author_id, words)
       SELECT gen_random_uuid(), $1, n, 'Escape run ' || n, DATE '2026-01-01' + (n % 300), $2,
         'Escape run' || n || ' bath helium ' ||
         (SELECT string_agg('word' || ((n * 7919 + k * 104729) % 5000), ' ') FROM generate_series(1, 56) AS k) ||
         CASE WHEN n % 10 = 0 THEN ' plateau' ELSE '' END
       FROM generate_series(1, $3::int) AS n`,
      [book, author, count],
    );
    await pg.query(
      `INSERT INTO entry_draft (entry_id, revision, title, doc, stamps, saved_at, saved_by)
       SELECT id, 1, title, jsonb_build_object('type', 'doc', 'content', jsonb_build_array(jsonb_build_object(
         'type', 'paragraph', 'attrs', jsonb_build_object('id', 'line_one_1'),
         'content', jsonb_build_array(jsonb_build_object('type', 'text', 'text', words))))), '{}', now(), $2
       FROM entry WHERE notebook_id = $1`,
      [book, author],
    );
    await pg.exec('ANALYZE entry; ANALYZE entry_draft; CHECKPOINT');
    const { rows: some } = await pg.query<{ id: string }>('SELECT id FROM entry WHERE notebook_id = $1 AND leaf = $2', [
      book,
      Math.ceil(count / 2),
    ]);
    return some[0]!.id;
  } finally {
    await pg.close();
  }
}
