import { AppError, statusByCode, type ErrorBody, type ErrorCode } from '@/lib/errors/app-error';

/** The server could not be reached at all, or answered with nothing that it would say. */
export class Unreachable extends Error {
  constructor(cause?: unknown) {
    super('The server cannot be reached. Nothing was lost; try again when the network is back.', { cause });
    this.name = 'Unreachable';
  }
}

export function isErrorBody(body: unknown): body is ErrorBody {
  const error = (body as ErrorBody | null)?.error;
  return typeof error === 'object' && error !== null && error.code in statusByCode && typeof error.message === 'string';
}

/** The refusal in a reply that is not ok, with the server's own sentence. */
export async function refusalIn(response: Response): Promise<AppError | Unreachable> {
  let body: unknown = null;
  try {
    body = await response.json();
  } catch {
    // A proxy's error page is no answer of ours; the status says what is known.
    return new Unreachable(new Error(`HTTP ${response.status}`));
  }
  if (!isErrorBody(body)) return new Unreachable(new Error(`HTTP ${response.status}`));
  const { code, message, field, details } = body.error;
  return new AppError(code as ErrorCode, message, { field, details });
}

/** One JSON request to this server; throws AppError with the server's sentence, or Unreachable. */
export async function request<T>(method: string, url: string, body?: unknown, options: RequestInit = {}): Promise<T> {
  let response: Response;
  try {
    response = await fetch(url, {
      method,
      credentials: 'same-origin',
      ...(body === undefined ? {} : { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } }),
      ...options,
    });
  } catch (cause) {
    throw new Unreachable(cause);
  }
  if (!response.ok) throw await refusalIn(response);
  return (await response.json()) as T;
}

/** A column's samples: Float64, little-endian, as every browser's own arrays are. */
export async function requestColumn(traceId: string, index: number): Promise<Float64Array> {
  let response: Response;
  try {
    response = await fetch(`/api/traces/${encodeURIComponent(traceId)}/columns/${index}`, {
      credentials: 'same-origin',
    });
  } catch (cause) {
    throw new Unreachable(cause);
  }
  if (!response.ok) throw await refusalIn(response);
  return new Float64Array(await response.arrayBuffer());
}
