/** The stable codes that an interface switches on, with the HTTP status that each is answered with. */
const STATUS = {
  'invalid-json': 400,
  'invalid-field': 400,
  'wrong-password': 400,
  'not-signed-in': 401,
  'unknown-tablet': 401,
  'lost-tablet': 401,
  'wrong-sign-in': 401,
  'not-allowed': 403,
  'foreign-origin': 403,
  'not-found': 404,
  'wrong-method': 405,
  conflict: 409,
  'link-used-up': 410,
  'body-too-large': 413,
  'wrong-content-type': 415,
  'foreign-host': 421,
  'too-many-attempts': 429,
  'pin-locked': 429,
  unexpected: 500,
} as const;

export type ErrorCode = keyof typeof STATUS;

/** An error that a person may read: it says what happened and what to do next. */
export class AppError extends Error {
  readonly code: ErrorCode;
  readonly status: number;
  /** The path of the field at fault, such as `people.0.name`. */
  readonly field: string | undefined;

  constructor(
    code: ErrorCode,
    message: string,
    options: { field?: string | undefined; cause?: unknown } = {},
  ) {
    super(message, options.cause === undefined ? undefined : { cause: options.cause });
    this.name = 'AppError';
    this.code = code;
    this.status = STATUS[code];
    this.field = options.field;
  }
}

/** The answer for something that is not there or that this person may not see: both read the same. */
export function notFound(what: string): AppError {
  return new AppError('not-found', `${what} was not found here. Check the address, or go back to the list.`);
}
