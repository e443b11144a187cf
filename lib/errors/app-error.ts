/** The typed codes of everything the application refuses; each has one HTTP status. */
export const statusByCode = {
  signed_out: 401,
  renewal_needed: 401,
  not_allowed: 403,
  cross_site: 403,
  not_found: 404,
  method_not_allowed: 405,
  conflict: 409,
  frozen: 409,
  gone: 410,
  too_large: 413,
  wrong_type: 415,
  invalid: 422,
  too_many: 429,
  storage_full: 507,
  unavailable: 503,
  internal: 500,
} as const;

export type ErrorCode = keyof typeof statusByCode;

/**
 * A refusal that a person may read: what happened, what was kept, what to do.
 * `details` is sent to the client as it is, `cause` is logged and never sent.
 */
export class AppError extends Error {
  readonly code: ErrorCode;
  readonly field?: string;
  readonly details?: Record<string, unknown>;

  constructor(
    code: ErrorCode,
    message: string,
    options: { field?: string; details?: Record<string, unknown>; cause?: unknown } = {},
  ) {
    super(message, { cause: options.cause });
    this.name = 'AppError';
    this.code = code;
    this.field = options.field;
    this.details = options.details;
  }

  get status(): number {
    return statusByCode[this.code];
  }
}

/** The body of every refused request. */
export type ErrorBody = {
  error: { code: ErrorCode; message: string; field?: string; details?: Record<string, unknown> };
};

export function errorBody(error: AppError): ErrorBody {
  return {
    error: {
      code: error.code,
      message: error.message,
      ...(error.field ? { field: error.field } : {}),
      ...(error.details ? { details: error.details } : {}),
    },
  };
}
