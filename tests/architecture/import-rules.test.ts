import { ESLint } from 'eslint';
import { describe, expect, it } from 'vitest';

/** Each line is code that must not be written there, with the rule that refuses it. */
const planted: { name: string; file: string; code: string; rule: string }[] = [
  {
    name: 'lib uses React',
    file: 'lib/units/planted.ts',
    code: "import { useState } from 'react';\nexport const x = useState;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'lib uses Node',
    file: 'lib/units/planted.ts',
    code: "import fs from 'node:fs';\nexport const x = fs;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'lib uses the server',
    file: 'lib/units/planted.ts',
    code: "import { env } from '@/server/env/env';\nexport const x = env;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'lib uses a component',
    file: 'lib/units/planted.ts',
    code: "import { Stair } from '@/components/ui/stair';\nexport const x = Stair;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'a component uses the server',
    file: 'components/ui/planted.tsx',
    code: "import { createEntry } from '@/server/entries/service';\nexport const x = createEntry;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'a page reads the database',
    file: 'app/planted.ts',
    code: "import { getDb } from '@/server/db/client';\nexport const x = getDb;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'a page uses queries',
    file: 'app/planted.ts',
    code: "import { findDraft } from '@/server/entries/queries';\nexport const x = findDraft;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: "a noun uses another noun's queries",
    file: 'server/devices/planted.ts',
    code: "import { findDraft } from '@/server/entries/queries';\nexport const x = findDraft;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'the database layer uses a noun',
    file: 'server/db/planted.ts',
    code: "import { createEntry } from '@/server/entries/service';\nexport const x = createEntry;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'a stand-in uses the server',
    file: 'fakes/mailbox/planted.ts',
    code: "import { env } from '@/server/env/env';\nexport const x = env;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'a page uses a stand-in',
    file: 'app/planted.ts',
    code: "import { localMailbox } from '@/fakes/mailbox/transport';\nexport const x = localMailbox;\n",
    rule: 'boundaries/dependencies',
  },
  {
    name: 'somebody reads the environment',
    file: 'server/devices/planted.ts',
    code: 'export const x = process.env.HOME;\n',
    rule: 'no-restricted-properties',
  },
];

describe('import rules', () => {
  const eslint = new ESLint();
  const refusals = async (file: string, code: string) => {
    const [result] = await eslint.lintText(code, { filePath: file });
    return result.messages.filter((message) => message.severity === 2).map((message) => message.ruleId);
  };

  for (const violation of planted) {
    it(`refuses that ${violation.name}`, async () => {
      expect(await refusals(violation.file, violation.code)).toContain(violation.rule);
    }, 120_000);
  }

  it('lets through what is allowed', async () => {
    expect(
      await refusals(
        'server/devices/planted.ts',
        "import { createEntry } from '@/server/entries/service';\nexport const x = createEntry;\n",
      ),
    ).toEqual([]);
    expect(await refusals('lib/units/planted.ts', "import { z } from 'zod';\nexport const x = z;\n")).toEqual([]);
    expect(
      await refusals('app/planted.ts', "import { Stair } from '@/components/ui/stair';\nexport const x = Stair;\n"),
    ).toEqual([]);
  }, 120_000);
});
