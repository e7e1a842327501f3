import { computed, reactive, type ComputedRef } from 'vue';

/** One file on its way to the server. It outlives the page: leaving the page does not stop it. */
export interface Upload {
  key: number;
  propertyId: string;
  fileName: string;
  bytes: number;
  /** 0 to 1; while `sending`. */
  sent: number;
  phase: 'queued' | 'sending' | 'taken' | 'failed';
  /** Why it could not be sent, in a sentence. */
  error: string | null;
  /** The log it became. */
  logId: string | null;
  /** True where the same file was there already. */
  same: boolean;
}

export interface Sent {
  id: string;
  same: boolean;
}
export type Send = (propertyId: string, file: File, progress: (share: number) => void) => Promise<Sent>;

/** Two at a time: enough to fill the line, and requests of the pages still find a free connection. */
const AT_ONCE = 2;

export interface Uploads {
  /** Those of a property that are not yet logs, newest last. */
  of: (propertyId: string) => Upload[];
  add: (propertyId: string, files: readonly File[]) => void;
  retry: (key: number) => void;
  dismiss: (key: number) => void;
  /** Ends the row of a file once the list of logs shows it. */
  settle: (logIds: ReadonlySet<string>) => void;
  busy: ComputedRef<boolean>;
}

/**
 * The queue of files being sent.
 * @param send sends one file
 * @param say turns what was thrown into a sentence
 */
export function createUploads(send: Send, say: (error: unknown) => string): Uploads {
  const list = reactive<Upload[]>([]);
  const files = new Map<number, File>();
  let next = 1;

  const run = async (upload: Upload): Promise<void> => {
    upload.phase = 'sending';
    upload.sent = 0;
    upload.error = null;
    try {
      const file = files.get(upload.key);
      if (!file) throw new Error('The file is no longer at hand: choose it again.');
      const { id, same } = await send(upload.propertyId, file, (share) => {
        upload.sent = share;
      });
      upload.logId = id;
      upload.same = same;
      upload.phase = 'taken';
      files.delete(upload.key);
    } catch (error) {
      upload.phase = 'failed';
      upload.error = say(error);
    }
    start();
  };
  function start(): void {
    let free = AT_ONCE - list.filter((upload) => upload.phase === 'sending').length;
    for (const upload of list.filter((one) => one.phase === 'queued')) {
      if (free <= 0) return;
      free -= 1;
      void run(upload);
    }
  }

  return {
    of: (propertyId) => list.filter((upload) => upload.propertyId === propertyId),
    add(propertyId, chosen) {
      for (const file of chosen) {
        files.set(next, file);
        list.push({
          key: next,
          propertyId,
          fileName: file.name,
          bytes: file.size,
          sent: 0,
          phase: 'queued',
          error: null,
          logId: null,
          same: false,
        });
        next += 1;
      }
      start();
    },
    retry(key) {
      const upload = list.find((one) => one.key === key);
      if (upload?.phase !== 'failed') return;
      upload.phase = 'queued';
      start();
    },
    dismiss(key) {
      const at = list.findIndex((upload) => upload.key === key && upload.phase !== 'sending');
      if (at < 0) return;
      list.splice(at, 1);
      files.delete(key);
    },
    settle(logIds) {
      for (let at = list.length - 1; at >= 0; at -= 1) {
        const { phase, logId, same } = list[at];
        if (phase === 'taken' && !same && logId !== null && logIds.has(logId)) list.splice(at, 1);
      }
    },
    busy: computed(() => list.some((upload) => upload.phase === 'queued' || upload.phase === 'sending')),
  };
}
