import { z } from 'zod';
import { CHANNELS } from '../units/channels.ts';
import { CivilDate } from './common.ts';

export const CHECK_IDS = [
  'no-diversion',
  'surplus-unseen',
  'export-dead',
  'clamp-reversed',
  'export-reversed',
  'clamp-elsewhere',
  'scale-wrong',
  'grid-heating',
  'heater-weak',
  'no-rise',
  'relay-never-calls',
  'relay-stuck',
  'relay-no-heat',
  'backup-before-sun',
  'thermostat-low',
  'loss-high',
  'overheat',
  'hygiene-short',
  'sensor-flat',
  'sensor-fault',
  'sensors-swapped',
  'clock-off',
  'log-silent',
  'register-reset',
] as const;
export type CheckId = (typeof CHECK_IDS)[number];

export const FINDING_STATUSES = [
  'open',
  'acknowledged',
  'booked',
  'mended',
  'confirmed',
  'reopened',
  'dismissed',
  'closed',
] as const;
export const SEVERITIES = ['danger', 'serious', 'minor', 'note'] as const;
export type Severity = (typeof SEVERITIES)[number];

export const Finding = z
  .object({
    id: z.string(),
    check: z.enum(CHECK_IDS),
    subject: z.string().meta({ description: 'What it is about: a channel, a heater, or the property' }),
    status: z.enum(FINDING_STATUSES),
    severity: z.enum(SEVERITIES),
    since: CivilDate,
    until: CivilDate.nullable(),
    openedOn: CivilDate,
    closedOn: CivilDate.nullable(),
    confidence: z.number().min(0).max(1),
    costPerWeek: z.object({
      kwh: z.number().nullable(),
      amount: z.number().nullable(),
      currency: z.string().nullable(),
    }),
    alternatives: z.array(z.enum(CHECK_IDS)),
    beneath: z.array(z.enum(CHECK_IDS)),
    evidence: z.object({
      from: CivilDate,
      to: CivilDate,
      text: z.string(),
      figures: z.record(z.string(), z.union([z.number(), z.string(), z.null()])),
      channels: z.array(z.enum(CHANNELS)),
    }),
  })
  .meta({ id: 'Finding' });
export type Finding = z.infer<typeof Finding>;
export const FindingList = z.object({ findings: z.array(Finding) }).meta({ id: 'FindingList' });
export const CheckResult = z.object({
  check: z.enum(CHECK_IDS),
  result: z.enum(['fault', 'healthy', 'cannotTell']),
  reason: z.string(),
});
export type CheckResult = z.infer<typeof CheckResult>;
export const CheckList = z.object({ checks: z.array(CheckResult) }).meta({ id: 'CheckList' });
