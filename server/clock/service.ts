import 'server-only';
import { AsyncLocalStorage } from 'node:async_hooks';

const set = new AsyncLocalStorage<Date>();

/** The server's time; every stamp of a record is taken from here, never from a request. */
export const now = (): Date => new Date(set.getStore() ?? Date.now());

/** Runs `work` as if it were another time: for the invented past of the demo notebook, and for tests of limits. */
export const atTime = <T>(time: Date, work: () => Promise<T>): Promise<T> => set.run(time, work);
