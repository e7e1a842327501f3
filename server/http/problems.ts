import type { Problem as ProblemBody } from '../../shared/api/common.ts';

interface Kind {
  status: number;
  title: string;
  /** Why it happens, for the catalogue and where no closer detail is known. */
  why: string;
  /** The way out. */
  fix: string;
}

const kind = (status: number, title: string, why: string, fix: string): Kind => ({ status, title, why, fix });

/** Every problem the API answers with. The code is permanent: scripts may rely on it. */
export const PROBLEMS = {
  'bad-json': kind(400, 'Not JSON', 'The body could not be read as JSON.', 'Send one JSON object in UTF-8.'),
  'bad-request': kind(400, 'Not understood', 'The request could not be read.', 'Check the address and the body.'),
  'no-session': kind(
    401,
    'Not signed in',
    'This needs a signed-in person or a valid token.',
    'Sign in, or send a token as “Authorization: Bearer …”.',
  ),
  'wrong-credentials': kind(
    401,
    'Not signed in',
    'The address and the password do not belong together.',
    'Check both; a password manager helps.',
  ),
  'foreign-origin': kind(
    403,
    'Sent from another site',
    'The request did not come from this site’s own pages.',
    'Send it from the configured address, or use a token.',
  ),
  forbidden: kind(403, 'Not allowed', 'Your role does not include this.', 'Ask someone who may.'),
  'no-consent': kind(
    403,
    'No consent to traces',
    'Anything finer than a day needs the occupier’s consent.',
    'Ask the occupier to consent to traces; daily figures can be seen without.',
  ),
  'not-found': kind(404, 'Not found', 'There is nothing here that you may see.', 'Check the address.'),
  'method-not-allowed': kind(405, 'Not this method', 'The address is right, the method is not.', 'See Allow.'),
  conflict: kind(
    409,
    'Not as things stand',
    'It would contradict what is recorded.',
    'Look at the present state first.',
  ),
  'too-large': kind(413, 'Too large', 'The body is larger than is taken.', 'Send less at once.'),
  'wrong-content-type': kind(
    415,
    'Another type of body is expected',
    'The body’s content type or encoding is not one that is read here.',
    'Send the content type that the documentation names.',
  ),
  'bad-fields': kind(422, 'Fields to correct', 'Some fields cannot be taken as they are.', 'See errors.'),
  'too-many': kind(429, 'Too many attempts', 'A limit was reached.', 'Wait as long as Retry-After says.'),
  unexpected: kind(
    500,
    'Something went wrong on our side',
    'An unexpected error; nothing was half done.',
    'Try again; if it stays, report the request id.',
  ),
  unavailable: kind(
    503,
    'Not available just now',
    'The database cannot be reached or is not ready.',
    'Try again in a moment.',
  ),
  'no-space': kind(507, 'No space left', 'The database’s disk is full.', 'Make room, then try again.'),
} as const satisfies Record<string, Kind>;

export type ProblemCode = keyof typeof PROBLEMS;
export type FieldError = { path: string; message: string };

interface Extra {
  errors?: FieldError[];
  headers?: Record<string, string>;
  cause?: unknown;
}

/** An error with an answer: thrown anywhere, turned into problem details at the edge. */
export class Problem extends Error {
  readonly code: ProblemCode;
  readonly errors: FieldError[] | undefined;
  readonly headers: Record<string, string>;

  constructor(code: ProblemCode, detail: string, { errors, headers = {}, cause }: Extra) {
    super(detail, { cause });
    this.name = 'Problem';
    this.code = code;
    this.errors = errors;
    this.headers = headers;
  }

  get status(): number {
    return PROBLEMS[this.code].status;
  }

  /** The body after RFC 9457. */
  body(requestId?: string): ProblemBody {
    const { title, status } = PROBLEMS[this.code];
    return { type: problemType(this.code), title, status, detail: this.message, requestId, errors: this.errors };
  }
}

/** The permanent `type` of a problem; it leads to its entry in the documentation. */
export const problemType = (code: ProblemCode) => `/api/docs#problem-${code}`;

/**
 * Makes a problem to throw.
 *
 * @param code which one
 * @param detail this case in a sentence or two; without it the catalogue's why and fix
 */
export function problem(code: ProblemCode, detail?: string, extra: Extra = {}): Problem {
  const { why, fix } = PROBLEMS[code];
  return new Problem(code, detail ?? `${why} ${fix}`, extra);
}

/** A problem about fields, each with its path such as `system.cylinder.volumeLitres`. */
export function badFields(errors: FieldError[]): Problem {
  const detail = errors.map(({ path, message }) => (path ? `${path}: ${message}` : message)).join('; ');
  return problem('bad-fields', detail, { errors });
}

/** The codes by which body parsers and PostgreSQL name what we can say more about. */
const KNOWN: Record<string, ProblemCode> = {
  'entity.parse.failed': 'bad-json',
  'entity.too.large': 'too-large',
  'charset.unsupported': 'wrong-content-type',
  'encoding.unsupported': 'wrong-content-type',
  ECONNREFUSED: 'unavailable',
  ECONNRESET: 'unavailable',
  ENOTFOUND: 'unavailable',
  ETIMEDOUT: 'unavailable',
  SequelizeConnectionError: 'unavailable',
  SequelizeConnectionRefusedError: 'unavailable',
  SequelizeConnectionTimedOutError: 'unavailable',
  SequelizeConnectionAcquireTimeoutError: 'unavailable',
  SequelizeHostNotFoundError: 'unavailable',
  SequelizeHostNotReachableError: 'unavailable',
  '53100': 'no-space',
  '53200': 'unavailable',
  '53300': 'unavailable',
  '57P01': 'unavailable',
  '57P02': 'unavailable',
  '57P03': 'unavailable',
  '08000': 'unavailable',
  '08001': 'unavailable',
  '08003': 'unavailable',
  '08006': 'unavailable',
};

/** Turns whatever was thrown into a problem; what is unknown is shown vaguely and kept as its cause. */
export function asProblem(thrown: unknown): Problem {
  if (thrown instanceof Problem) return thrown;
  const { type, code, name, status, message, parent } = (thrown ?? {}) as Record<string, unknown>;
  const inner = (parent ?? {}) as Record<string, unknown>;
  for (const key of [type, code, inner['code'], name])
    if (typeof key === 'string' && Object.hasOwn(KNOWN, key)) return problem(KNOWN[key]!, undefined, { cause: thrown });
  if (typeof message === 'string' && /^(Connection terminated|timeout exceeded when trying to connect)/.test(message))
    return problem('unavailable', undefined, { cause: thrown });
  if (typeof status === 'number' && status >= 400 && status < 500)
    return problem('bad-request', undefined, { cause: thrown });
  return problem('unexpected', undefined, { cause: thrown });
}
