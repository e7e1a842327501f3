import { describe, expect, it } from 'vitest';
import { createUploads, type Sent } from '../../../../src/components/logs/uploads.ts';

const file = (name: string): File => new File(['a,b\n1,2\n'], name);
const turn = (): Promise<void> => new Promise((resolve) => setTimeout(resolve));

interface Pending {
  name: string;
  progress: (share: number) => void;
  resolve: (sent: Sent) => void;
  reject: (error: Error) => void;
}

function harness() {
  const pending: Pending[] = [];
  const uploads = createUploads(
    (_property, sent, progress) =>
      new Promise((resolve, reject) => pending.push({ name: sent.name, progress, resolve, reject })),
    (error) => (error as Error).message,
  );
  return { pending, uploads };
}

describe('the queue of uploads', () => {
  it('sends two at a time and gives each its own row at once', async () => {
    const { pending, uploads } = harness();
    uploads.add('p', [file('1'), file('2'), file('3')]);
    expect(uploads.of('p').map((one) => one.phase)).toEqual(['sending', 'sending', 'queued']);
    expect(pending).toHaveLength(2);
    pending[0].progress(0.4);
    expect(uploads.of('p')[0].sent).toBe(0.4);
    pending[0].resolve({ id: 'p-1', same: false });
    await turn();
    expect(uploads.of('p').map((one) => one.phase)).toEqual(['taken', 'sending', 'sending']);
    expect(uploads.busy.value).toBe(true);
  });

  it('keeps a failed file with its reason, sends it again on request and lets go of it when told', async () => {
    const { pending, uploads } = harness();
    uploads.add('p', [file('1')]);
    pending[0].reject(new Error('The line broke.'));
    await turn();
    const [failed] = uploads.of('p');
    expect(failed).toMatchObject({ phase: 'failed', error: 'The line broke.' });
    uploads.retry(failed.key);
    expect(pending).toHaveLength(2);
    uploads.dismiss(failed.key);
    expect(uploads.of('p'), 'what is being sent is not let go').toHaveLength(1);
    pending[1].reject(new Error('again'));
    await turn();
    uploads.dismiss(failed.key);
    expect(uploads.of('p')).toEqual([]);
    expect(uploads.busy.value).toBe(false);
  });

  it('gives a row over to the list of logs, but keeps the word that a file was there already', async () => {
    const { pending, uploads } = harness();
    uploads.add('p', [file('1'), file('2')]);
    pending[0].resolve({ id: 'p-1', same: false });
    pending[1].resolve({ id: 'p-2', same: true });
    await turn();
    uploads.settle(new Set(['p-1', 'p-2']));
    expect(uploads.of('p').map((one) => one.logId)).toEqual(['p-2']);
    expect(uploads.of('q')).toEqual([]);
  });
});
