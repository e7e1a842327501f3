/**
 * Something the person who started us can put right, such as a port that is taken. It is shown as it
 * stands, without a stack; its text says what is wrong and the command that mends it.
 */
export class Refusal extends Error {}

/** Tells what is going on. Goes to the error stream: the other one carries results alone. */
export function say(line) {
  process.stderr.write(`${line}\n`);
}

/** Shows why we end: a refusal as it stands, anything else with its stack. */
export function complain(error) {
  say(error instanceof Refusal ? `\n${error.message}` : (error?.stack ?? String(error)));
}
