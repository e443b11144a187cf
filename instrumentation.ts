/** Opens the database, finishes what a crash left behind, and starts the worker loop before the first request. */
export async function register(): Promise<void> {
  if (process.env.NEXT_RUNTIME !== 'nodejs') return;
  const { startServer } = await import('./server/start/service');
  try {
    await startServer();
  } catch (error) {
    // Nothing can be served without the data; one sentence says why, and the process ends instead of lingering.
    process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
    process.exit(1);
  }
}
