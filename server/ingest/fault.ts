/** The steps of reading a log at which a test build can be made to die. */
export const STEPS = ['parse', 'store', 'reduce', 'check', 'beforeCommit', 'afterCommit'] as const;
export type Step = (typeof STEPS)[number];

/** Dies at once and without a trace, as by a power cut, if this is the step set in FAULT_AT (test builds only). */
export function passStep(faultAt: string | null, step: Step): void {
  if (faultAt === step) process.kill(process.pid, 'SIGKILL');
}
