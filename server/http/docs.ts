import { exampleOf } from './docs-example.ts';
import { PROBLEMS } from './problems.ts';

interface Schema {
  $ref?: string;
  type?: string | string[];
  description?: string;
  properties?: Record<string, Schema>;
  required?: string[];
  items?: Schema;
  prefixItems?: Schema[];
  additionalProperties?: Schema | boolean;
  anyOf?: Schema[];
  oneOf?: Schema[];
  allOf?: Schema[];
  enum?: unknown[];
  const?: unknown;
  minimum?: number;
  maximum?: number;
  exclusiveMinimum?: number;
}
interface Media {
  content?: Record<string, { schema?: Schema }>;
}
interface Operation {
  operationId: string;
  tags: string[];
  summary: string;
  description?: string;
  'x-policy': unknown;
  parameters: { name: string; in: string; required: boolean; description?: string; schema: Schema }[];
  requestBody?: Media;
  responses: Record<string, Media & { description: string }>;
}
interface Document {
  info: { title: string; description: string };
  tags: { name: string }[];
  paths: Record<string, Record<string, Operation>>;
  components: { schemas: Record<string, Schema> };
}
interface Entry {
  method: string;
  path: string;
  operation: Operation;
}

/**
 * The API as a page to read, from the OpenAPI document: every route with its fields, answers and a call to copy.
 *
 * @param document what openApiOf made
 * @param address where the service is reached, for the calls
 */
export function docsPage(document: unknown, address: string): string {
  const { info, tags, paths, components } = document as Document;
  const entries: Entry[] = Object.entries(paths).flatMap(([path, methods]) =>
    Object.entries(methods).map(([method, operation]) => ({ method: method.toUpperCase(), path, operation })),
  );
  const chapters = tags.map(({ name }) => ({ name, entries: entries.filter((e) => e.operation.tags.includes(name)) }));
  return `<!doctype html>
<html lang="en-GB">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${text(info.title)}: the HTTP API</title>
<link rel="icon" href="data:,">
<link rel="stylesheet" href="/api/docs/style.css">
</head>
<body>
<header>
<h1>${text(info.title)}: the HTTP API</h1>
<p>${text(info.description)}</p>
<p class="quiet">The same as OpenAPI 3.1: <a href="/api/openapi.json">/api/openapi.json</a></p>
</header>
<nav aria-label="Routes">${chapters
    .map(
      (chapter) => `<h2 id="${slug(chapter.name)}-list">${text(chapter.name)}</h2>
<ul>${chapter.entries
        .map((e) => `<li><a href="#${e.operation.operationId}">${text(e.operation.summary)}</a></li>`)
        .join('')}</ul>`,
    )
    .join('\n')}
<ul><li><a href="#shapes">Shapes</a></li><li><a href="#problems">Problems</a></li></ul></nav>
<main>
${chapters
  .map(
    (chapter) =>
      `<section aria-labelledby="${slug(chapter.name)}"><h2 id="${slug(chapter.name)}">${text(chapter.name)}</h2>
${chapter.entries.map((entry) => routeOf(entry, address, components.schemas)).join('\n')}</section>`,
  )
  .join('\n')}
<section aria-labelledby="shapes"><h2 id="shapes">Shapes</h2>
${Object.entries(components.schemas)
  .map(([name, schema]) => `<article id="shape-${name}"><h3>${text(name)}</h3>${fieldsOf(schema, name)}</article>`)
  .join('\n')}</section>
<section aria-labelledby="problems"><h2 id="problems">Problems</h2>
<p>Every error is a problem after RFC 9457; its type is permanent and leads here.</p>
${Object.entries(PROBLEMS)
  .map(
    ([code, { status, title, why, fix }]) =>
      `<article id="problem-${code}"><h3>${status} ${code}</h3><p><strong>${text(title)}.</strong> ${text(why)} ${text(fix)}</p></article>`,
  )
  .join('\n')}</section>
</main>
</body>
</html>
`;
}

function routeOf({ method, path, operation }: Entry, address: string, shapes: Record<string, Schema>): string {
  const { operationId, summary, description, parameters, requestBody, responses } = operation;
  const [bodyType, bodyMedia] = Object.entries(requestBody?.content ?? {})[0] ?? [];
  return `<article id="${operationId}">
<h3>${method} ${text(path)}</h3>
<p><strong>${text(summary)}.</strong> ${text(description ?? '')}</p>
<p class="quiet">${text(whoMay(operation['x-policy']))}</p>
${
  parameters.length
    ? table(
        `Parameters of ${method} ${path}`,
        parameters.map((p) => [
          `<code>${text(p.name)}</code>`,
          text(p.in === 'path' ? 'in the path' : p.required ? 'in the query' : 'in the query, optional'),
          typeOf(p.schema),
          text(p.description ?? ''),
        ]),
        ['Parameter', 'Where', 'Type', 'Meaning'],
      )
    : ''
}
${bodyType && bodyMedia?.schema ? `<h4>Body: ${text(bodyType)}</h4>${bodyMedia.schema.$ref ? `<p>${typeOf(bodyMedia.schema)}</p>` : fieldsOf(bodyMedia.schema, `body of ${method} ${path}`)}` : ''}
<h4>Answers</h4>
${table(
  `Answers of ${method} ${path}`,
  Object.entries(responses).map(([status, response]) => {
    const [type, media] = Object.entries(response.content ?? {})[0] ?? [];
    return [status, media?.schema ? typeOf(media.schema) : text(type ?? ''), text(response.description)];
  }),
  ['Status', 'Body', 'Meaning'],
)}
<details><summary>Call to copy</summary><pre tabindex="0" aria-label="Call to copy for ${method} ${text(path)}">${text(curl(method, path, address, operation, shapes))}</pre></details>
</article>`;
}

function curl(
  method: string,
  path: string,
  address: string,
  operation: Operation,
  shapes: Record<string, Schema>,
): string {
  const query = operation.parameters
    .filter((p) => p.in === 'query' && p.required)
    .map((p) => `${p.name}=${encodeURIComponent(String(exampleOf(p.schema, p.name, shapes)))}`)
    .join('&');
  const lines = [`curl -X ${method} '${address}${path}${query ? `?${query}` : ''}'`];
  if (operation['x-policy'] !== 'anyone') lines.push(`-H 'Authorization: Bearer <token>'`);
  const [type, media] = Object.entries(operation.requestBody?.content ?? {})[0] ?? [];
  if (type === 'multipart/form-data') lines.push(`-F 'file=@log.csv'`);
  else if (type && media?.schema) {
    lines.push(`-H 'Content-Type: ${type}'`, `-d '${JSON.stringify(exampleOf(media.schema, 'body', shapes))}'`);
  }
  return lines.join(' \\\n  ');
}

function whoMay(policy: unknown): string {
  if (policy === 'anyone') return 'Anyone may call it.';
  if (policy === 'signedIn') return 'Needs a signed-in person or a token.';
  const [action] = Object.values(policy as Record<string, string>);
  return `Needs a grant at the property that includes “${action}”.`;
}

function fieldsOf(schema: Schema, label: string): string {
  if (!schema.properties) return `<p>${typeOf(schema)} ${text(schema.description ?? '')}</p>`;
  return table(`Fields of ${label}`, rowsOf(schema, ''), ['Field', 'Type', 'Meaning']);
}

function rowsOf(schema: Schema, prefix: string): string[][] {
  return Object.entries(schema.properties ?? {}).flatMap(([name, field]) => {
    const path = prefix ? `${prefix}.${name}` : name;
    const optional = schema.required?.includes(name) ? '' : ', optional';
    const rows = [[`<code>${text(path)}</code>`, `${typeOf(field)}${optional}`, text(field.description ?? '')]];
    if (field.properties) rows.push(...rowsOf(field, path));
    if (field.items?.properties) rows.push(...rowsOf(field.items, `${path}[]`));
    return rows;
  });
}

function typeOf(schema: Schema): string {
  if (schema.$ref) {
    const name = schema.$ref.split('/').at(-1) ?? '';
    return `<a href="#shape-${name}">${text(name)}</a>`;
  }
  if (schema.const !== undefined) return text(JSON.stringify(schema.const));
  if (schema.enum) return schema.enum.map((value) => text(JSON.stringify(value))).join(', ');
  const options = schema.anyOf ?? schema.oneOf;
  if (options) return [...new Set(options.map(typeOf))].join(' or ');
  if (schema.allOf) return schema.allOf.map(typeOf).join(' and ');
  if (schema.prefixItems) return `[${schema.prefixItems.map(typeOf).join(', ')}]`;
  if (schema.items) return `list of ${typeOf(schema.items)}`;
  if (typeof schema.additionalProperties === 'object') return `map of ${typeOf(schema.additionalProperties)}`;
  const type = Array.isArray(schema.type) ? schema.type.join(' or ') : (schema.type ?? 'anything');
  const least = schema.minimum ?? schema.exclusiveMinimum;
  const bounds = [
    least !== undefined &&
      least > Number.MIN_SAFE_INTEGER &&
      `from ${schema.minimum === undefined ? 'above ' : ''}${least}`,
    schema.maximum !== undefined && schema.maximum < Number.MAX_SAFE_INTEGER && `to ${schema.maximum}`,
  ].filter(Boolean);
  return text([type, ...bounds].join(' '));
}

function table(label: string, rows: string[][], head: string[]): string {
  return `<div class="wide" role="region" tabindex="0" aria-label="${text(label)}"><table><thead><tr>${head
    .map((cell) => `<th scope="col">${cell}</th>`)
    .join('')}</tr></thead><tbody>${rows
    .map((row) => `<tr>${row.map((cell) => `<td>${cell}</td>`).join('')}</tr>`)
    .join('')}</tbody></table></div>`;
}

const slug = (name: string) => `chapter-${name.toLowerCase().replace(/[^a-z0-9]+/g, '-')}`;

const ESCAPES: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };
const text = (value: string) => value.replace(/[&<>"']/g, (c) => ESCAPES[c] ?? c);
