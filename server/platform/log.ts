import { type Logger, pino } from 'pino';

export type { Logger } from 'pino';

/**
 * A structured log without personal data: ids and codes only. Bodies, cookies, tokens and mail addresses are
 * never given to it; the redaction is the second fence.
 */
export function createLog(level: string): Logger {
  return pino({
    level,
    base: null,
    redact: {
      paths: [
        'req.headers',
        'req.body',
        'res.headers',
        '*.email',
        '*.password',
        '*.token',
        '*.name',
        '*.phone',
      ],
      remove: true,
    },
  });
}
