/** Opens the database, finishes what a crash left behind, and starts the worker loop before the first request. */
export async function register(): Promise<void> {
  if (process.env.NEXT_RUNTIME !== 'nodejs') return;
  const { startServer } = await import('./server/start/service');
  await startServer();
}
