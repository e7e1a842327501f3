interface Schema {
  $ref?: string;
  type?: string | string[];
  format?: string;
  pattern?: string;
  properties?: Record<string, Schema>;
  required?: string[];
  items?: Schema;
  minItems?: number;
  anyOf?: Schema[];
  oneOf?: Schema[];
  enum?: unknown[];
  const?: unknown;
}

/** Words that read better than a bare “text”; all of it invented. */
const BY_NAME: Record<string, unknown> = {
  email: 'someone@example.test',
  password: 'correct words in a row',
  name: 'An invented home',
  timeZone: 'Europe/London',
  volumeLitres: 210,
  currency: 'GBP',
  fuelPerKwh: 0.06,
  importPerKwh: 0.25,
  exportPerKwh: 0.05,
  channel: 'diversion',
  from: '2026-06-01',
  to: '2026-06-30',
};

/** The smallest example that has every required field, to be copied and filled in. */
export function exampleOf(schema: Schema, name: string, shapes: Record<string, Schema>): unknown {
  if (schema.$ref) return exampleOf(shapes[schema.$ref.split('/').at(-1) ?? ''] ?? {}, name, shapes);
  if (schema.const !== undefined) return schema.const;
  if (schema.enum) return name in BY_NAME && schema.enum.includes(BY_NAME[name]) ? BY_NAME[name] : schema.enum[0];
  const [option] = schema.anyOf ?? schema.oneOf ?? [];
  if (option) return exampleOf(option, name, shapes);
  const type = Array.isArray(schema.type) ? schema.type[0] : schema.type;
  if (type === 'object') {
    const wanted = Object.entries(schema.properties ?? {}).filter(([key]) => schema.required?.includes(key));
    return Object.fromEntries(wanted.map(([key, field]) => [key, exampleOf(field, key, shapes)]));
  }
  if (type === 'array') return schema.items && schema.minItems ? [exampleOf(schema.items, name, shapes)] : [];
  if (schema.format === 'date-time') return '2026-06-01T00:00:00Z';
  if (name in BY_NAME) return BY_NAME[name];
  if (schema.format === 'date') return '2026-06-01';
  if (type === 'string') return schema.pattern?.includes(':[0-5]') ? '18:00' : 'text';
  if (type === 'boolean') return true;
  return type === 'integer' || type === 'number' ? 1 : null;
}
