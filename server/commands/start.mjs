// `npm start`: installs and builds what is missing, then runs the server and passes signals on. Plain JavaScript, since
// nothing is installed yet when it begins.
import { spawn, spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import fs from 'node:fs';
import path from 'node:path';

const root = path.resolve(import.meta.dirname, '../..');
process.chdir(root);
const port = process.env.PORT || '3000';
const host = process.env.HOST || '127.0.0.1';
const dataDir = path.resolve(process.env.DATA_DIR || './data');

checkNode();
install();
if (process.argv.includes('--install-only')) process.exit(0);
const buildId = build();
if (process.argv.includes('--build-only')) process.exit(0);
serve();

function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major > 20 || (major === 20 && minor >= 19)) return;
  fail(`Kelvinleaf needs Node.js 20.19 or later; this is ${process.version}.`);
}

/** Installs by the lock file, without running scripts of packages, when node_modules is missing or another lock file's. */
function install() {
  const stamp = path.join(root, 'node_modules', '.kelvinleaf-lock');
  const wanted = digest(['package-lock.json']);
  if (fs.existsSync(stamp) && fs.readFileSync(stamp, 'utf8') === wanted) return;
  say('Installing packages …');
  run('npm', ['ci', '--ignore-scripts', '--no-audit', '--no-fund', '--loglevel=error']);
  fs.writeFileSync(stamp, wanted);
}

/** Builds when a source file differs from what was built. Returns the build's id. */
function build() {
  const id = digest(sources());
  const stamp = path.join(root, '.next', 'kelvinleaf-build');
  if (fs.existsSync(stamp) && fs.readFileSync(stamp, 'utf8') === id) return id.slice(0, 12);
  say('Building (about a minute) …');
  run('npx', ['--no-install', 'next', 'build'], { NEXT_TELEMETRY_DISABLED: '1', NODE_ENV: 'production' });
  run('node', ['server/commands/build.mjs']);
  fs.writeFileSync(stamp, id);
  return id.slice(0, 12);
}

function sources() {
  const roots = ['app', 'components', 'lib', 'server', 'fakes', 'drizzle'];
  const files = roots.flatMap((folder) =>
    fs
      .readdirSync(folder, { recursive: true, withFileTypes: true })
      .filter((item) => item.isFile())
      .map((item) => path.join(item.parentPath, item.name)),
  );
  return [
    ...files.filter((file) => !/\.test\.tsx?$/.test(file)),
    'package-lock.json',
    'next.config.js',
    'tailwind.config.ts',
    'postcss.config.js',
    'tsconfig.json',
    'proxy.ts',
    'instrumentation.ts',
  ].sort();
}

function digest(files) {
  const hash = createHash('sha256');
  for (const file of files) hash.update(file).update('\0').update(fs.readFileSync(file)).update('\0');
  return hash.digest('hex');
}

function serve() {
  const base = process.env.BASE_URL || `http://localhost:${port}`;
  if (!base.startsWith('https:') && !['localhost', '127.0.0.1'].includes(new URL(base).hostname)) {
    fail(
      'Beyond this machine the notebook needs https: without it a browser can neither hash nor sign. Put a TLS proxy in front and set BASE_URL to its https address.',
    );
  }
  const child = spawn(process.execPath, ['node_modules/next/dist/bin/next', 'start', '-p', port, '-H', host], {
    stdio: ['ignore', 'inherit', 'inherit'],
    env: {
      ...process.env,
      NODE_ENV: 'production',
      NEXT_TELEMETRY_DISABLED: '1',
      BUILD_ID: buildId,
      NEXT_MANUAL_SIG_HANDLE: 'true',
    },
  });
  let stopping = false;
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
    process.on(signal, () => {
      if (stopping) return;
      stopping = true;
      child.kill('SIGTERM');
      // A request that hangs must not keep the process for ever; the journal holds what was acknowledged.
      setTimeout(() => child.kill('SIGKILL'), 20_000).unref();
    });
  }
  child.on('exit', (code, signal) => process.exit(stopping ? 0 : (code ?? (signal ? 1 : 0))));
  say(`Kelvinleaf: ${base}`);
  say(`Data: ${dataDir}`);
  if ((process.env.DEMO || 'on') === 'on') {
    say('Demo (invented data): ines@, tomas@, priya@, oskar@, ada@fjordheim.example, password cold-finger-demo');
  }
}

function run(command, args, env = {}) {
  const result = spawnSync(command, args, { stdio: 'inherit', env: { ...process.env, ...env } });
  if (result.status !== 0) fail(`${command} ${args.join(' ')} did not succeed; what it said stands above.`);
}

function say(line) {
  process.stdout.write(`${line}\n`);
}

function fail(sentence) {
  process.stderr.write(`${sentence}\n`);
  process.exit(1);
}
