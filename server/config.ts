import path from 'node:path';
import { z } from 'zod';

const whole = z.coerce.number().int();
const size = whole.min(1);

const Settings = z.object({
  PORT: whole.min(0).max(65535).default(3000),
  HOST: z.string().min(1).default('127.0.0.1'),
  DATABASE_URL: z.string().regex(/^postgres(ql)?:\/\//, 'an address that begins with postgres://'),
  SMTP_URL: z
    .string()
    .regex(/^smtps?:\/\//, 'an address that begins with smtp:// or smtps://')
    .optional(),
  BASE_URL: z
    .string()
    .regex(/^https?:\/\/[^/]+\/?$/, 'the address people use, such as https://hotwater.example.test, without a path')
    .transform((url) => new URL(url).origin)
    .optional(),
  DEMO: z.enum(['on', 'off']).default('on'),
  DEMO_PASSWORD: z.string().optional(),
  UPLOAD_MAX_BYTES: size.default(512 * 2 ** 20),
  QUOTA_BYTES: size.default(5 * 2 ** 30),
  UPLOADS_PER_MINUTE: size.default(120),
  LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
  /** How many proxies in front of us set X-Forwarded-For; 0: none, the header is ignored. */
  TRUST_PROXY: whole.min(0).max(10).default(0),
  /** Where the built client lies. */
  CLIENT_FOLDER: z.string().default('dist/client'),
  FAULT_AT: z.string().optional(),
  NODE_ENV: z.string().optional(),
});

export interface Config {
  port: number;
  host: string;
  databaseUrl: string;
  smtpUrl: string | null;
  /** The configured address, such as https://hotwater.example.test; null: whatever address is served. */
  baseUrl: string | null;
  demo: boolean;
  demoPassword: string | null;
  uploadMaxBytes: number;
  quotaBytes: number;
  uploadsPerMinute: number;
  logLevel: string;
  trustProxy: number;
  /** An absolute path. */
  clientFolder: string;
  /** A named step at which the process kills itself; test builds only. */
  faultAt: string | null;
  /** Answers are held against their schema; on except in production. */
  checkAnswers: boolean;
}

/**
 * Reads the settings. Throws one error that names every wrong variable, its value and what is expected.
 *
 * @param env the environment; an empty value counts as unset
 */
export function readConfig(env: Record<string, string | undefined> = process.env): Config {
  const given = Object.fromEntries(Object.entries(env).filter(([, value]) => value !== undefined && value !== ''));
  const read = Settings.safeParse(given);
  if (!read.success) {
    const lines = read.error.issues.map(({ path, message }) => {
      const name = String(path[0]);
      return `${name} ${name in given ? `is ${shown(name, given[name] ?? '')}` : 'is not set'}; expected: ${message}`;
    });
    throw new Error(`The settings cannot be used.\n${lines.join('\n')}`);
  }
  const s = read.data;
  return {
    port: s.PORT,
    host: s.HOST,
    databaseUrl: s.DATABASE_URL,
    smtpUrl: s.SMTP_URL ?? null,
    baseUrl: s.BASE_URL ?? null,
    demo: s.DEMO === 'on',
    demoPassword: s.DEMO_PASSWORD ?? null,
    uploadMaxBytes: s.UPLOAD_MAX_BYTES,
    quotaBytes: s.QUOTA_BYTES,
    uploadsPerMinute: s.UPLOADS_PER_MINUTE,
    logLevel: s.LOG_LEVEL,
    trustProxy: s.TRUST_PROXY,
    clientFolder: path.resolve(s.CLIENT_FOLDER),
    faultAt: s.NODE_ENV === 'production' ? null : (s.FAULT_AT ?? null),
    checkAnswers: s.NODE_ENV !== 'production',
  };
}

/** Passwords may stand in addresses: those are not repeated. */
function shown(name: string, value: string): string {
  return name.endsWith('PASSWORD') || /:\/\/[^/]*@/.test(value) ? '(not shown)' : JSON.stringify(value);
}
