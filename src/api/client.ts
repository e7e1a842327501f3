import type { Problem } from '../../shared/api/common.ts';

/** What went wrong with a call, as the server tells it (RFC 9457) or as the network does. */
export class ApiProblem extends Error {
  /** HTTP status; 0 where no answer came. */
  readonly status: number;
  readonly type: string;
  readonly title: string;
  readonly detail: string;
  readonly errors: readonly { path: string; message: string }[];

  constructor(problem: Partial<Problem>) {
    super(problem.detail || problem.title || 'The call failed.');
    this.name = 'ApiProblem';
    this.status = problem.status ?? 0;
    this.type = problem.type ?? 'about:blank';
    this.title = problem.title ?? 'The call failed';
    this.detail = problem.detail ?? '';
    this.errors = problem.errors ?? [];
  }
}

const NO_ANSWER: Partial<Problem> = {
  status: 0,
  title: 'No answer from the server',
  detail: 'The server could not be reached. Check the connection, then try again.',
};
const NOT_UNDERSTOOD: Partial<Problem> = {
  title: 'The server gave an answer that cannot be read',
  detail: 'Something between here and the server is wrong. Try again in a minute.',
};

/** Any thrown thing as a problem that can be shown. */
export function asProblem(error: unknown): ApiProblem {
  if (error instanceof ApiProblem) return error;
  return new ApiProblem({ title: 'Something went wrong', detail: error instanceof Error ? error.message : '' });
}

export function isAbort(error: unknown): boolean {
  return error instanceof DOMException && error.name === 'AbortError';
}

let signedOut: () => void = () => {};

/** Called whenever the server answers 401 to a call that was made as a signed-in person. */
export function onSignedOut(handler: () => void): void {
  signedOut = handler;
}

type Query = Record<string, string | number | boolean | null | undefined>;

export interface CallOptions {
  query?: Query;
  signal?: AbortSignal;
  /** A 401 is this call's own business: no turn to the sign-in page. */
  quiet?: boolean;
}

/** A path of the API with its query; what is null or undefined is left out. */
export function apiUrl(path: string, query: Query = {}): string {
  const search = new URLSearchParams();
  for (const [name, value] of Object.entries(query)) if (value != null) search.set(name, String(value));
  const text = search.toString();
  return text ? `${path}?${text}` : path;
}

function problemOf(status: number, text: string): ApiProblem {
  try {
    return new ApiProblem({ ...(JSON.parse(text) as Partial<Problem>), status });
  } catch {
    return new ApiProblem({ ...NOT_UNDERSTOOD, status });
  }
}

async function call<T>(method: string, path: string, body: unknown, options: CallOptions): Promise<T> {
  const init: RequestInit = {
    method,
    credentials: 'same-origin',
    headers: { Accept: 'application/json' },
    signal: options.signal ?? null,
  };
  if (body !== undefined) {
    init.headers = { Accept: 'application/json', 'Content-Type': 'application/json' };
    init.body = JSON.stringify(body);
  }
  let response: Response;
  let text: string;
  try {
    response = await fetch(apiUrl(path, options.query), init);
    text = await response.text();
  } catch (error) {
    if (isAbort(error)) throw error;
    throw new ApiProblem(NO_ANSWER);
  }
  if (response.status === 401 && !options.quiet) signedOut();
  if (!response.ok) throw problemOf(response.status, text);
  if (text === '') return undefined as T;
  try {
    return JSON.parse(text) as T;
  } catch {
    throw new ApiProblem({ ...NOT_UNDERSTOOD, status: response.status });
  }
}

/**
 * The typed client. `T` is the shape that shared/api gives for the answer.
 * @throws ApiProblem for every answer that is no success, DOMException `AbortError` when aborted
 */
export const api = {
  get: <T>(path: string, options: CallOptions = {}) => call<T>('GET', path, undefined, options),
  post: <T>(path: string, body?: unknown, options: CallOptions = {}) => call<T>('POST', path, body, options),
  put: <T>(path: string, body?: unknown, options: CallOptions = {}) => call<T>('PUT', path, body, options),
  patch: <T>(path: string, body?: unknown, options: CallOptions = {}) => call<T>('PATCH', path, body, options),
  delete: <T = void>(path: string, options: CallOptions = {}) => call<T>('DELETE', path, undefined, options),
};

/**
 * Fetches a file.
 * @throws ApiProblem for every answer that is no success, DOMException `AbortError` when aborted
 */
export async function fetchBlob(path: string, signal?: AbortSignal): Promise<Blob> {
  let response: Response;
  try {
    response = await fetch(path, { credentials: 'same-origin', signal: signal ?? null });
    if (response.ok) return await response.blob();
  } catch (error) {
    if (isAbort(error)) throw error;
    throw new ApiProblem(NO_ANSWER);
  }
  if (response.status === 401) signedOut();
  throw problemOf(response.status, await response.text().catch(() => ''));
}

/**
 * Sends a form with a file and tells how much of it has gone; fetch cannot.
 * @param progress called with the share sent, 0 to 1
 * @returns the parsed answer and its status, so that "the same file" (200) is told from a new one (202)
 */
export function upload<T>(
  path: string,
  form: FormData,
  progress: (share: number) => void = () => {},
  signal?: AbortSignal,
): Promise<{ status: number; answer: T }> {
  return new Promise((resolve, reject) => {
    const abort = new DOMException('The upload was stopped.', 'AbortError');
    if (signal?.aborted) return reject(abort);
    const request = new XMLHttpRequest();
    request.open('POST', path);
    request.setRequestHeader('Accept', 'application/json');
    request.upload.onprogress = (event) => {
      if (event.lengthComputable && event.total > 0) progress(event.loaded / event.total);
    };
    request.onerror = () => reject(new ApiProblem(NO_ANSWER));
    request.onabort = () => reject(abort);
    request.onload = () => {
      const { status, responseText } = request;
      if (status === 401) signedOut();
      if (status < 200 || status >= 300) return reject(problemOf(status, responseText));
      try {
        resolve({ status, answer: JSON.parse(responseText) as T });
      } catch {
        reject(new ApiProblem({ ...NOT_UNDERSTOOD, status }));
      }
    };
    signal?.addEventListener('abort', () => request.abort(), { once: true });
    request.send(form);
  });
}
