/** A small validator for the keywords a zod schema exports to JSON Schema; it refuses keywords it does not know. */

type Schema = Readonly<Record<string, unknown>>;

const annotations = new Set([
  '$schema',
  '$defs',
  'definitions',
  'title',
  'description',
  'default',
  'id',
  '$id',
  'readOnly',
]);

const typeOf = (value: unknown): string =>
  value === null ? 'null' : Array.isArray(value) ? 'array' : typeof value;

/** Where a value breaks a schema; an empty list when it does not. */
export function violations(value: unknown, schema: Schema, root: Schema = schema, path = ''): string[] {
  const found: string[] = [];
  const entries = Object.entries(schema);
  for (const [keyword, given] of entries) {
    if (annotations.has(keyword) || keyword === 'properties' || keyword === 'propertyNames') continue;
    found.push(...violated(keyword, given, value, schema, root, path));
  }
  if (typeOf(value) === 'object') {
    for (const [key, own] of Object.entries((schema.properties ?? {}) as Record<string, Schema>)) {
      const inner = (value as Record<string, unknown>)[key];
      if (inner !== undefined) found.push(...violations(inner, own, root, `${path}/${key}`));
    }
  }
  return found;
}

function violated(
  keyword: string,
  given: unknown,
  value: unknown,
  schema: Schema,
  root: Schema,
  path: string,
): string[] {
  const broken = (when: boolean): string[] => (when ? [`${path || '/'} ${keyword}`] : []);
  const isNumber = typeof value === 'number';
  switch (keyword) {
    case 'type':
      return broken(typeOf(value) !== given && !(given === 'integer' && Number.isInteger(value)));
    case 'const':
      return broken(value !== given);
    case 'enum':
      return broken(!(given as unknown[]).includes(value));
    case 'minimum':
      return broken(isNumber && value < (given as number));
    case 'maximum':
      return broken(isNumber && value > (given as number));
    case 'exclusiveMinimum':
      return broken(isNumber && value <= (given as number));
    case 'exclusiveMaximum':
      return broken(isNumber && value >= (given as number));
    case 'minItems':
      return broken(Array.isArray(value) && value.length < (given as number));
    case 'anyOf':
      return broken(!(given as Schema[]).some((own) => violations(value, own, root, path).length === 0));
    case 'allOf':
      return (given as Schema[]).flatMap((own) => violations(value, own, root, path));
    case '$ref':
      return violations(value, resolved(given as string, root), root, path);
    case 'required':
      return (given as string[])
        .filter((key) => typeOf(value) === 'object' && !(key in (value as object)))
        .map((key) => `${path}/${key} required`);
    case 'items':
      return Array.isArray(value)
        ? value.flatMap((item, i) => violations(item, given as Schema, root, `${path}/${i}`))
        : [];
    case 'additionalProperties': {
      if (typeOf(value) !== 'object') return [];
      const known = Object.keys((schema.properties ?? {}) as object);
      const others = Object.entries(value as object).filter(([key]) => !known.includes(key));
      if (given === false) return others.map(([key]) => `${path}/${key} additionalProperties`);
      return others.flatMap(([key, inner]) => violations(inner, given as Schema, root, `${path}/${key}`));
    }
    default:
      throw new Error(`the validator of the tests does not know "${keyword}"`);
  }
}

function resolved(reference: string, root: Schema): Schema {
  return reference
    .replace(/^#\/?/, '')
    .split('/')
    .filter((part) => part !== '')
    .reduce((at, part) => at[part] as Schema, root);
}
