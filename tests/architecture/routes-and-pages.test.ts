import fs from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { pagesUnderTest } from '@/tests/browser/pages';

const files = fs
  .readdirSync('app', { recursive: true, encoding: 'utf8' })
  .map((file) => path.join('app', file))
  .sort();
const methods = ['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE'];

/** Routes that cannot be wrapped, each with what guards it instead. */
const ownGuard: Record<string, string> = {
  'app/api/uploadthing/route.ts': 'handleUploads',
  'app/api/local-uploads/[...path]/route.ts': 'handleUploadService',
};

describe('every route', () => {
  for (const file of files.filter((name) => name.endsWith('route.ts'))) {
    it(`${file} goes through the access wrapper`, () => {
      const source = fs.readFileSync(file, 'utf8');
      if (ownGuard[file]) {
        expect(source).toContain(ownGuard[file]);
        return;
      }
      const exported = [...source.matchAll(/export (?:const|async function|function) (\w+)/g)]
        .map((match) => match[1])
        .filter((name) => methods.includes(name));
      expect(exported.length).toBeGreaterThan(0);
      for (const method of exported)
        expect(source, method).toMatch(new RegExp(`export const ${method} = withAccess\\(`));
      // A GET must not change anything: none of them takes a body.
      expect(source).not.toMatch(/export const GET = withAccess\(\{[^}]*body:/);
    });
  }
});

describe('every page', () => {
  const pages = files.filter((name) => name.endsWith('page.tsx'));
  const addressOf = (file: string) =>
    file
      .replace(/^app/, '')
      .replace(/\/\([^)]*\)/g, '')
      .replace(/\/page\.tsx$/, '') || '/';

  for (const file of pages.filter((name) => name.includes('(book)'))) {
    it(`${file} asks server/access first`, () => {
      expect(fs.readFileSync(file, 'utf8')).toContain('await pageAccess(');
    });
  }

  it('is in the list that the browser tests look at', () => {
    const listed = new Set(pagesUnderTest.map((page) => page.pattern));
    expect(pages.map(addressOf).filter((address) => !listed.has(address))).toEqual([]);
  });
});

describe('files', () => {
  const roots = ['app', 'components', 'lib', 'server', 'fakes'];
  const sources = roots.flatMap((root) =>
    fs
      .readdirSync(root, { recursive: true, encoding: 'utf8' })
      .filter((file) => /\.(ts|tsx|mjs)$/.test(file) && !/\.test\.tsx?$/.test(file))
      .map((file) => path.join(root, file)),
  );

  it('stay short enough to have one subject', () => {
    const long = sources.filter((file) => fs.readFileSync(file, 'utf8').split('\n').length > 500);
    expect(long).toEqual([]);
  });

  it('are no barrels', () => {
    expect(sources.filter((file) => /\/index\.tsx?$/.test(file))).toEqual([]);
  });

  it('of the server are marked as such', () => {
    const unmarked = sources.filter(
      (file) =>
        file.startsWith('server/') &&
        file.endsWith('.ts') &&
        !file.startsWith('server/db/schema/') &&
        !/-worker\.ts$/.test(file) &&
        // Shared with the worker thread, which stands outside the bundler.
        file !== 'server/traces/layout.ts' &&
        file !== 'server/commands/run.ts' &&
        !fs.readFileSync(file, 'utf8').includes("import 'server-only'"),
    );
    expect(unmarked).toEqual([]);
  });
});
