/** The server's log: JSON lines on stdout. */
import { pino, type Logger } from "pino";

export const openLogger = (level: string): Logger => pino({ level });
