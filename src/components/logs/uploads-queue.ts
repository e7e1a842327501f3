import { asProblem } from '../../api/client.ts';
import { sendLog } from '../../api/logs.ts';
import { createUploads } from './uploads.ts';

const say = (error: unknown): string => {
  const problem = asProblem(error);
  return problem.detail || problem.title;
};

/** The one queue of this tab. It outlives the pages, so that a person can leave while files are on their way. */
export const uploads = createUploads(async (propertyId, file, progress) => {
  const { answer } = await sendLog(propertyId, file, null, progress);
  return { id: answer.log.id, same: answer.same ?? false };
}, say);

// Closing the tab would lose what is being sent: the browser asks.
window.addEventListener('beforeunload', (event) => {
  if (uploads.busy.value) event.preventDefault();
});
