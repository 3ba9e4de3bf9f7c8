/** The server's own log: one line of JSON for each thing that went wrong, never shown to users. */
import pino from 'pino';

export const log = pino({ name: 'nonius', base: undefined });
