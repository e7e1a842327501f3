import { describe, expect, it } from 'vitest';
import { LOG_STATUSES } from '../../../../shared/api/log.ts';
import { logSentence, plural, sizeWords, spanWords } from '../../../../src/components/logs/sentence.ts';

const log = {
  status: 'kept' as const,
  progress: 1,
  rows: { read: 8930, accepted: 8928, rejected: 2, unchanged: 0 },
  from: '2023-02-28T14:00:00Z',
  to: '2023-03-31T13:55:00Z',
  questions: [],
  failure: null,
};

describe('logSentence', () => {
  it('says of a kept log what was taken, when, and what was not', () => {
    expect(logSentence(log, 'Australia/Brisbane')).toBe(
      '8,928 rows of 8,930 taken, 1 March 2023 to 31 March 2023. 2 rejected.',
    );
  });
  it('counts the questions of one that asks', () => {
    const question = { id: 'q', about: 'Which?', choices: [] };
    expect(logSentence({ ...log, status: 'asking', questions: [question] }, 'UTC')).toMatch(/^1 question to answer/);
    expect(logSentence({ ...log, status: 'asking', questions: [question, question] }, 'UTC')).toMatch(/^2 questions/);
  });
  it('gives the server’s reason for a refusal', () => {
    expect(logSentence({ ...log, status: 'refused', failure: 'The file is empty.' }, 'UTC')).toBe(
      'Not taken. The file is empty.',
    );
  });
  it.each(LOG_STATUSES)('has a whole sentence without an exclamation mark for %s', (status) => {
    expect(logSentence({ ...log, status }, 'UTC')).toMatch(/^[A-Z0-9][^!]*\.$/);
  });
  it('rounds progress down, so that 100 % means done', () => {
    expect(logSentence({ ...log, status: 'reading', progress: 0.9999 }, 'UTC')).toContain('99 %');
  });
});

describe('spanWords', () => {
  it('names the civil dates of the property’s zone', () => {
    // 23:30 UTC on 31 December is already the new year in Helsinki (UTC+2 in winter).
    expect(spanWords('2025-12-31T23:30:00Z', '2026-01-01T10:00:00Z', 'Europe/Helsinki')).toBe('1 January 2026');
    expect(spanWords(null, null, 'UTC')).toBeNull();
  });
});

it('sizeWords and plural', () => {
  expect([0, 1, 999, 1000, 12_400, 999_600, 12_345_678, 2e9].map(sizeWords)).toEqual([
    '0 bytes',
    '1 byte',
    '999 bytes',
    '1.0 kB',
    '12 kB',
    '1.0 MB',
    '12 MB',
    '2.0 GB',
  ]);
  expect(plural(1, 'row')).toBe('1 row');
  expect(plural(1234, 'row')).toBe('1,234 rows');
});
