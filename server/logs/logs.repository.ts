import type { Log, LogStatus } from '../../shared/api/log.ts';
import type { ColumnPlan, Question, RowProblem, Sample } from '../../shared/api/plan.ts';
import type { Scope, Tx } from '../database/connection.ts';

/** How a log came by its plan: a person gave or corrected it, a saved one fitted, or inspection found it. */
export type PlanBy = 'person' | 'saved' | 'found';

export interface StoredLog {
  propertyId: string;
  n: number;
  fileName: string;
  original: Buffer;
  bytes: number;
  uploadedAt: Date;
  uploadedBy: string | null;
  status: LogStatus;
  progress: number;
  revision: number;
  rows: Log['rows'];
  fromAt: Date | null;
  toAt: Date | null;
  plan: ColumnPlan | null;
  planBy: PlanBy | null;
  shape: string | null;
  questions: Question[];
  problems: RowProblem[];
  sample: Sample | null;
  failure: string | null;
}

const COLUMNS = `
  l.property_id as "propertyId", l.n, l.file_name as "fileName", l.original, l.bytes, l.uploaded_at as "uploadedAt",
  (select name from people where id = l.uploaded_by) as "uploadedBy", l.status, l.progress, l.revision,
  json_build_object('read', l.rows_read, 'accepted', l.rows_accepted, 'rejected', l.rows_rejected,
    'unchanged', l.rows_unchanged) as rows,
  l.from_at as "fromAt", l.to_at as "toAt", l.plan, l.plan_by as "planBy", l.shape, l.questions, l.problems, l.sample,
  l.failure`;

export async function findLog(scope: Scope, propertyId: string, n: number): Promise<StoredLog | null> {
  const [log] = await scope.query<StoredLog>(`select ${COLUMNS} from logs l where l.property_id = $1 and l.n = $2`, [
    propertyId,
    n,
  ]);
  return log ?? null;
}

/** A property's logs, the newest first. */
export function logsOf(scope: Scope, propertyId: string): Promise<StoredLog[]> {
  return scope.query<StoredLog>(`select ${COLUMNS} from logs l where l.property_id = $1 order by l.n desc`, [
    propertyId,
  ]);
}

/** The property's logs of the same bytes, those in use before withdrawn ones, the newest first. */
export function logsOfBytes(scope: Scope, propertyId: string, original: Buffer): Promise<StoredLog[]> {
  return scope.query<StoredLog>(
    `select ${COLUMNS} from logs l where l.property_id = $1 and l.original = $2
     order by l.status = 'withdrawn', l.n desc`,
    [propertyId, original],
  );
}

/** Makes whoever adds or asks for logs of this property do so one after another, until the transaction ends. */
export async function lockLogs(tx: Tx, propertyId: string): Promise<void> {
  await tx.query(`select pg_advisory_xact_lock(hashtextextended($1, 1))`, [propertyId]);
}

/** Adds a log and returns its number; call `lockLogs` before. */
export async function insertLog(
  tx: Tx,
  log: Pick<StoredLog, 'propertyId' | 'fileName' | 'original' | 'bytes' | 'plan'> & { personId: string },
): Promise<number> {
  const [row] = await tx.query<{ n: number }>(
    `insert into logs (property_id, n, file_name, original, bytes, uploaded_by, status, plan, plan_by)
     values ($1, (select coalesce(max(n), 0) + 1 from logs where property_id = $1), $2, $3, $4, $5, 'waiting', $6::jsonb,
       case when $6::jsonb is null then null else 'person' end)
     returning n`,
    [log.propertyId, log.fileName, log.original, log.bytes, log.personId, log.plan && JSON.stringify(log.plan)],
  );
  if (!row) throw new Error('A log was not added.');
  return row.n;
}

/** Asks for a log to be read (again), by another plan if one is given. */
export async function askToRead(tx: Tx, propertyId: string, n: number, plan: ColumnPlan | null): Promise<void> {
  await tx.query(
    `update logs set status = 'waiting', progress = 0, failure = null, revision = revision + 1,
       plan = coalesce($3::jsonb, plan), plan_by = case when $3::jsonb is null then plan_by else 'person' end,
       questions = case when $3::jsonb is null then questions else '[]' end
     where property_id = $1 and n = $2`,
    [propertyId, n, plan && JSON.stringify(plan)],
  );
}

/** Marks a log as withdrawn; false if it is already. */
export async function markWithdrawn(tx: Tx, propertyId: string, n: number): Promise<boolean> {
  const rows = await tx.query(
    `update logs set status = 'withdrawn', revision = revision + 1, progress = 0
     where property_id = $1 and n = $2 and status <> 'withdrawn' returning 1`,
    [propertyId, n],
  );
  return rows.length > 0;
}

/** What reading finds out about a log. Only for the revision that was read: a later wish overrules it. */
export type LogChange = Partial<
  Pick<
    StoredLog,
    | 'status'
    | 'progress'
    | 'plan'
    | 'planBy'
    | 'shape'
    | 'questions'
    | 'problems'
    | 'sample'
    | 'failure'
    | 'rows'
    | 'fromAt'
    | 'toAt'
  >
> & { reachDays?: number; registers?: boolean };

const JSON_COLUMNS: ReadonlySet<string> = new Set(['plan', 'questions', 'problems', 'sample']);
const COLUMN_OF: Record<Exclude<keyof LogChange, 'rows'>, string> = {
  status: 'status',
  progress: 'progress',
  plan: 'plan',
  planBy: 'plan_by',
  shape: 'shape',
  questions: 'questions',
  problems: 'problems',
  sample: 'sample',
  failure: 'failure',
  fromAt: 'from_at',
  toAt: 'to_at',
  reachDays: 'reach_days',
  registers: 'registers',
};

/** Changes a log if its revision is still the one given; false if it is not. */
export async function changeLog(
  scope: Scope,
  { propertyId, n, revision }: Pick<StoredLog, 'propertyId' | 'n' | 'revision'>,
  { rows, ...fields }: LogChange,
): Promise<boolean> {
  const values: unknown[] = [propertyId, n, revision];
  const sets = Object.entries(fields).map(([name, value]) => {
    const column = COLUMN_OF[name as keyof typeof COLUMN_OF];
    const json = JSON_COLUMNS.has(column);
    values.push(json && value !== null ? JSON.stringify(value) : value);
    return `${column} = $${values.length}${json ? '::jsonb' : ''}`;
  });
  if (rows)
    for (const [name, value] of Object.entries(rows)) {
      values.push(value);
      sets.push(`rows_${name} = $${values.length}`);
    }
  const changed = await scope.query(
    `update logs set ${sets.join(', ')} where property_id = $1 and n = $2 and revision = $3 returning 1`,
    values,
  );
  return changed.length > 0;
}

/** The upload that a key stood for, in the last day. */
export async function findKey(scope: Scope, propertyId: string, personId: string, key: string) {
  const [row] = await scope.query<{ original: Buffer; log: number }>(
    'select original, log from upload_keys where property_id = $1 and person_id = $2 and key = $3',
    [propertyId, personId, key],
  );
  return row ?? null;
}

export async function putKey(
  tx: Tx,
  propertyId: string,
  personId: string,
  key: string,
  original: Buffer,
  log: number,
): Promise<void> {
  await tx.query(
    `insert into upload_keys (property_id, person_id, key, original, log) values ($1, $2, $3, $4, $5)
     on conflict do nothing`,
    [propertyId, personId, key, original, log],
  );
}

/** The plan that a person last kept or corrected for files of this shape. */
export async function savedPlan(scope: Scope, propertyId: string, shape: string): Promise<ColumnPlan | null> {
  const [row] = await scope.query<{ plan: ColumnPlan }>(
    'select plan from column_plans where property_id = $1 and shape = $2 order by version desc limit 1',
    [propertyId, shape],
  );
  return row?.plan ?? null;
}

/** Saves a plan as the newest version for its shape, unless it already is. */
export async function savePlan(tx: Tx, propertyId: string, shape: string, plan: ColumnPlan, log: number) {
  await tx.query(
    `with newest as (
       select version, plan from column_plans where property_id = $1 and shape = $2 order by version desc limit 1)
     insert into column_plans (property_id, shape, version, plan, log)
     select $1, $2, coalesce((select version from newest), 0) + 1, $3::jsonb, $4
     where not exists (select from newest where plan = $3::jsonb)`,
    [propertyId, shape, JSON.stringify(plan), log],
  );
}
