/** The id of the field for a path of the API, so that the summary of errors can lead to it. */
export function fieldId(form: string, path: string): string {
  return `${form}-${path.replace(/[^A-Za-z0-9]+/g, '-')}`;
}
