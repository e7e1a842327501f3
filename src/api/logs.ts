import type { LogAnswer, LogList } from '../../shared/api/log.ts';
import type { ColumnPlan, Inspection } from '../../shared/api/plan.ts';
import { api, fetchBlob, upload } from './client.ts';

const ofProperty = (id: string): string => `/api/properties/${encodeURIComponent(id)}/logs`;
const ofLog = (id: string): string => `/api/logs/${encodeURIComponent(id)}`;

function form(file: File, plan?: ColumnPlan | null): FormData {
  const data = new FormData();
  if (plan) data.append('plan', JSON.stringify(plan));
  data.append('file', file, file.name);
  return data;
}

type Progress = (share: number) => void;

export const listLogs = (propertyId: string, signal?: AbortSignal) =>
  api.get<LogList>(ofProperty(propertyId), { signal });
/** How a file would be read; the server keeps nothing of it. */
export const inspectLog = (
  propertyId: string,
  file: File,
  plan?: ColumnPlan | null,
  progress?: Progress,
  signal?: AbortSignal,
) => upload<Inspection>(`${ofProperty(propertyId)}/inspect`, form(file, plan), progress, signal);
/** Sends a log; status 202 for a new one, 200 with `same` for one that is there. */
export const sendLog = (
  propertyId: string,
  file: File,
  plan?: ColumnPlan | null,
  progress?: Progress,
  signal?: AbortSignal,
) => upload<LogAnswer>(ofProperty(propertyId), form(file, plan), progress, signal);
/** @param wait seconds to hold the answer until the log's state changes */
export const readLog = (id: string, wait?: number, signal?: AbortSignal) =>
  api.get<LogAnswer>(ofLog(id), { query: { wait }, signal });
export const putPlan = (id: string, plan: ColumnPlan) => api.put<LogAnswer>(`${ofLog(id)}/plan`, { plan });
export const withdrawLog = (id: string) => api.delete(ofLog(id));
export const rejectedHref = (id: string): string => `${ofLog(id)}/rejected.csv`;
export const originalHref = (id: string): string => `${ofLog(id)}/original`;
/** The file as it was sent. */
export const fetchOriginal = (id: string, signal?: AbortSignal) => fetchBlob(originalHref(id), signal);
