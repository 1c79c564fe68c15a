import { pino, type Logger } from 'pino';

export type Log = Logger;

/** Structured log on standard output; passwords, cookies and tokens never reach it. */
export function openLog(level: string): Log {
  return pino({ level, redact: ['req.headers.cookie', 'req.headers.authorization', 'res.headers["set-cookie"]'] });
}
