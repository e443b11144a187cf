import 'server-only';
import { randomBytes } from 'node:crypto';
import fs from 'node:fs';
import path from 'node:path';
import { z } from 'zod';

/** The only reader of process.env. Every variable is optional: without them everything is local. */
const schema = z.object({
  PORT: z.coerce.number().int().min(1).max(65535).default(3000),
  HOST: z.string().default('127.0.0.1'),
  BASE_URL: z.url().optional(),
  DATA_DIR: z.string().default('./data'),
  DEMO: z.enum(['on', 'off']).default('on'),
  DATABASE_URL: z.string().optional(),
  SMTP_URL: z.url().optional(),
  MAIL_FROM: z.string().default('Kelvinleaf <kelvinleaf@localhost>'),
  UPLOADTHING_TOKEN: z.string().optional(),
  QUOTA_BYTES: z.coerce.number().positive().default(200e9),
  BUILD_ID: z.string().default('development'),
  /** How many proxies of your own stand in front and append to X-Forwarded-For. */
  TRUSTED_PROXIES: z.coerce.number().int().min(0).max(5).default(0),
  /** A dumped, migrated database that tests start from. */
  DATABASE_TEMPLATE: z.string().optional(),
});

export type Env = {
  port: number;
  /** Origin under which people open the application; links in mails are built from it alone. */
  baseUrl: string;
  dataDir: string;
  demo: boolean;
  databaseUrl: string | null;
  smtpUrl: string | null;
  mailFrom: string;
  uploadToken: string | null;
  /** Most bytes of received files that the data folder may hold. */
  quotaBytes: number;
  buildId: string;
  trustedProxies: number;
  databaseTemplate: string | null;
};

let cached: Env | null = null;

/** Environment, checked once. Throws a sentence naming the variable that cannot be read. */
export function env(): Env {
  if (cached) return cached;
  const given = Object.fromEntries(Object.entries(process.env).filter(([, value]) => value !== ''));
  const parsed = schema.safeParse(given);
  if (!parsed.success) {
    const issue = parsed.error.issues[0];
    throw new Error(`The environment variable ${issue.path.join('.')} cannot be used: ${issue.message}.`);
  }
  const e = parsed.data;
  cached = {
    port: e.PORT,
    baseUrl: (e.BASE_URL ?? `http://localhost:${e.PORT}`).replace(/\/$/, ''),
    dataDir: path.resolve(/* turbopackIgnore: true */ e.DATA_DIR),
    demo: e.DEMO === 'on',
    databaseUrl: e.DATABASE_URL ?? null,
    smtpUrl: e.SMTP_URL ?? null,
    mailFrom: e.MAIL_FROM,
    uploadToken: e.UPLOADTHING_TOKEN ?? null,
    quotaBytes: e.QUOTA_BYTES,
    buildId: e.BUILD_ID,
    trustedProxies: e.TRUSTED_PROXIES,
    databaseTemplate: e.DATABASE_TEMPLATE ?? null,
  };
  return cached;
}

/** For tests that change the environment between cases. */
export function forgetEnv(): void {
  cached = null;
}

export type Secrets = { session: string; upload: string; installation: string };

/** Secrets of this installation: made at first start in `DATA_DIR/secrets.json`, mode 0600. */
export function secrets(): Secrets {
  const file = path.join(env().dataDir, 'secrets.json');
  fs.mkdirSync(env().dataDir, { recursive: true, mode: 0o700 });
  try {
    const made: Secrets = {
      session: randomBytes(32).toString('base64url'),
      upload: `sk_local_${randomBytes(24).toString('hex')}`,
      installation: randomBytes(12).toString('hex'),
    };
    // 'wx' fails where the file exists: two processes that start at once share the first one's secrets.
    fs.writeFileSync(file, JSON.stringify(made, null, 1), { mode: 0o600, flag: 'wx' });
    return made;
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error;
    return JSON.parse(fs.readFileSync(file, 'utf8')) as Secrets;
  }
}
