import 'server-only';
import { ZodError } from 'zod';
import { AppError } from '@/lib/errors/app-error';

/** The one mapping of whatever was thrown to what may be told. */
export function toAppError(error: unknown): AppError {
  if (error instanceof AppError) return error;
  if (error instanceof ZodError)
    return new AppError('invalid', error.issues[0].message, { field: error.issues[0].path.join('.') });
  const code = codeOf(error);
  if (code === 'ENOSPC' || code === 'EDQUOT' || code === '53100') {
    return new AppError(
      'storage_full',
      'The disk of the server is full, so nothing was stored. Your text is kept in this browser; tell the administrator.',
      { cause: error },
    );
  }
  if (code === '40001' || code === '40P01') {
    return new AppError('conflict', 'Somebody changed the same thing at that moment. Nothing was stored; try again.', {
      cause: error,
    });
  }
  if (code === '23505') {
    return new AppError('conflict', 'This exists already. Nothing was stored.', { cause: error });
  }
  if (code === 'KL001') {
    return new AppError('frozen', 'This is a record and cannot be changed. Nothing was stored.', { cause: error });
  }
  if (code === 'ECONNREFUSED' || code === '57P01' || code === '57P03' || code === '08006') {
    return new AppError(
      'unavailable',
      'The database cannot be reached now. Your text is kept in this browser and sent when it is back.',
      { cause: error },
    );
  }
  return new AppError(
    'internal',
    'Something went wrong on the server; it has been noted there. Nothing you typed is lost: try again.',
    { cause: error },
  );
}

/** SQLSTATE or system error code, wherever the drivers and Drizzle put it. */
function codeOf(error: unknown): string | null {
  for (let at: unknown = error, depth = 0; at instanceof Error && depth < 5; at = at.cause, depth += 1) {
    const code = (at as { code?: unknown }).code;
    if (typeof code === 'string') return code;
  }
  return null;
}
