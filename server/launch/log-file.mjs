import fs from 'node:fs';

const MOST_BYTES = 20 * 2 ** 20;

/** A file that takes a process's output; past a size it starts anew and keeps the one before as `<file>.old`. */
export function logFile(file) {
  let size = fs.existsSync(file) ? fs.statSync(file).size : 0;
  return {
    file,
    write(piece) {
      if (size > MOST_BYTES) {
        fs.renameSync(file, `${file}.old`);
        size = 0;
      }
      size += piece.length;
      try {
        fs.appendFileSync(file, piece);
      } catch {
        // A full disk must not end what still works.
      }
    },
  };
}

/** The last lines of a file; empty if there is none. */
export function tail(file, lines = 15) {
  return fs.existsSync(file) ? fs.readFileSync(file, 'utf8').trimEnd().split('\n').slice(-lines).join('\n') : '';
}
