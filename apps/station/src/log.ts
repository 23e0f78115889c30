/** The part of pino that the station uses. */
export interface Log {
  info(facts: object, line: string): void;
  warn(facts: object, line: string): void;
  error(facts: object, line: string): void;
}
