import 'server-only';
import type { JobHandlers } from '@/server/jobs/service';
import { ingestTrace } from '@/server/traces/service';

export const jobHandlers: JobHandlers = {
  'ingest trace': async (payload) => ingestTrace(String(payload.traceId)),
};
