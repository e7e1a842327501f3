/** Something the demo loader could not do, in a sentence. */
export class DemoFailure extends Error {}

interface Answer {
  status: number;
  body: unknown;
}

/** One person's session with the product, over HTTP alone. */
export class Caller {
  private cookie = '';

  constructor(
    private readonly baseUrl: string,
    readonly email: string,
  ) {}

  /** Signs in. @throws DemoFailure if the address or the password is refused */
  async signIn(password: string): Promise<void> {
    const answer = await this.send('POST', '/api/session', { email: this.email, password });
    if (answer.status !== 200)
      throw new DemoFailure(`${this.email} could not sign in: ${told(answer)}. Is DEMO_PASSWORD the demo's password?`);
  }

  /** The answer's body. @throws DemoFailure for any status but 2xx */
  async call<T>(method: string, path: string, body?: unknown): Promise<T> {
    const answer = await this.send(method, path, body);
    if (answer.status < 200 || answer.status > 299) throw new DemoFailure(`${method} ${path}: ${told(answer)}`);
    return answer.body as T;
  }

  private async send(method: string, path: string, body?: unknown): Promise<Answer> {
    const headers: Record<string, string> = { accept: 'application/json' };
    if (this.cookie) headers.cookie = this.cookie;
    const form = body instanceof FormData;
    if (body !== undefined && !form) headers['content-type'] = 'application/json';
    let response: Response;
    try {
      response = await fetch(`${this.baseUrl}${path}`, { method, headers, body: form ? body : JSON.stringify(body) });
    } catch (error) {
      const cause = error instanceof Error && error.cause instanceof Error ? error.cause.message : String(error);
      throw new DemoFailure(`Nothing answers at ${this.baseUrl}${path}: ${cause}`, { cause: error });
    }
    for (const cookie of response.headers.getSetCookie()) {
      const pair = cookie.split(';')[0];
      if (pair.slice(pair.indexOf('=') + 1) !== '') this.cookie = pair;
    }
    const text = await response.text();
    return { status: response.status, body: parsed(text) };
  }
}

function parsed(text: string): unknown {
  if (text === '') return null;
  try {
    return JSON.parse(text);
  } catch {
    return text.slice(0, 200);
  }
}

/** A refusal in words: the problem's detail and the fields it names. */
function told({ status, body }: Answer): string {
  if (body === null || typeof body !== 'object') return `${status} ${String(body ?? '')}`.trim();
  const problem = body as { title?: string; detail?: string; errors?: { path: string; message: string }[] };
  const fields = (problem.errors ?? []).map(({ path, message }) => `${path}: ${message}`).join('; ');
  return [`${status} ${problem.detail ?? problem.title ?? ''}`.trim(), fields].filter(Boolean).join(' ');
}
