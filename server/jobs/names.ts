/** Every job and what it is given. A payload is small, names rows by id, and may be worked off twice. */
export interface JobPayloads {
  /** Clears away what has run out: sessions, counters, devices not seen for a year. */
  sweep: Record<string, never>;
  /** Reads a log that waits to be read. */
  readLog: { propertyId: string; n: number };
  /** Lets a property's figures follow what was withdrawn or recorded. */
  refreshFigures: { propertyId: string };
}
export type JobName = keyof JobPayloads;

/** What became of a job that did not throw; it is logged. */
export type Outcome = 'done' | 'nothingToDo';

export interface JobContext {
  /** Aborted when the process drains; a long job should stop at its next safe point and throw. */
  signal: AbortSignal;
}

export type Handlers = { [Name in JobName]: (payload: JobPayloads[Name], context: JobContext) => Promise<Outcome> };
