import pino from 'pino';
import { config } from './config';

/** Structured log on standard output, one JSON object a line. Never given passwords, tokens or whole requests. */
export const log = pino({
  level: process.env.VITEST ? 'silent' : config.logLevel,
  base: null,
  timestamp: pino.stdTimeFunctions.isoTime,
  redact: ['password', 'token', '*.password', '*.token']
});
