import { z } from 'zod';

/** A civil date in the property's zone. */
export const CivilDate = z.iso
  .date()
  .refine((date) => date >= '1900' && date < '2200', 'a date between 1900 and 2199')
  .meta({ description: 'Civil date in the property’s zone, YYYY-MM-DD' });
/** An instant, RFC 3339 in UTC. */
export const Instant = z.iso.datetime({ offset: true }).meta({ description: 'Instant, RFC 3339' });
export const ClockTime = z
  .string()
  .regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'a time of day as HH:MM')
  .meta({ description: 'Time of day, HH:MM' });
/** 24:00 is allowed as the end of a day. */
export const ClockTimeEnd = z
  .string()
  .regex(/^(([01]\d|2[0-3]):[0-5]\d|24:00)$/, 'a time of day as HH:MM, 24:00 at most')
  .meta({ description: 'Time of day, HH:MM; 24:00 is the day’s end' });

/** RFC 9457 problem details. */
export const Problem = z
  .object({
    type: z.string(),
    title: z.string(),
    status: z.int(),
    detail: z.string(),
    requestId: z.string().optional(),
    errors: z.array(z.object({ path: z.string(), message: z.string() })).optional(),
  })
  .meta({ id: 'Problem' });
export type Problem = z.infer<typeof Problem>;
