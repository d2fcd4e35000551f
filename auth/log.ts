import pino from 'pino';

/** One JSON line per event on standard output. Secrets never reach it, whatever is logged. */
export const log = pino({
  name: 'web',
  level: process.env.BEADLINE_LOG ?? 'info',
  redact: {
    paths: [
      'authorization',
      'cookie',
      'password',
      'token',
      '*.authorization',
      '*.cookie',
      '*.password',
      '*.token',
    ],
    censor: '[hidden]',
  },
});
