import { z } from 'zod';

const Environment = z.object({
  DATABASE_URL: z.string().min(1),
  PORT: z.coerce.number().int().min(0).max(65535).default(4310),
  HOST: z.string().default('127.0.0.1'),
  PUBLIC_URL: z.string().optional(),
  DEMO: z.enum(['0', '1']).default('0'),
  NODE_ENV: z.string().default('production'),
  LOG_LEVEL: z.string().default('info'),
});

export interface Env {
  /** As the application role. */
  databaseUrl: string;
  port: number;
  host: string;
  /** Address that people open; cookies get `Secure` and the `__Host-` prefix if it is https. */
  publicUrl: string | null;
  isDemo: boolean;
  logLevel: string;
}

/** Reads the process environment once. Throws with the names of what is missing or wrong. */
export function readEnv(source: Readonly<Record<string, string | undefined>> = process.env): Env {
  const parsed = Environment.safeParse(source);
  if (!parsed.success) {
    throw new Error(
      `the environment can’t be used: ${parsed.error.issues.map((issue) => `${issue.path.join('.')} ${issue.message}`).join('; ')}`,
    );
  }
  const { DATABASE_URL, PORT, HOST, PUBLIC_URL, DEMO, LOG_LEVEL } = parsed.data;
  return {
    databaseUrl: DATABASE_URL,
    port: PORT,
    host: HOST,
    publicUrl: PUBLIC_URL ?? null,
    isDemo: DEMO === '1',
    logLevel: LOG_LEVEL,
  };
}
