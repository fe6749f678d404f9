import { pino, type DestinationStream, type Logger } from 'pino';

/** Characters that JSON leaves as they are and a terminal obeys, or that turn or break the line: DEL, C1, direction marks, line separators. */
const OBEYED = /[\u007f-\u009f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069]/g;

const escaped = (character: string): string => `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`;

/** The server's log: one JSON object a line, in which no character of a stranger's text is obeyed by whoever shows it. */
export const serverLog = (level: string, destination: DestinationStream): Logger =>
  pino({ level, hooks: { streamWrite: (line) => line.replace(OBEYED, escaped) } }, destination);
