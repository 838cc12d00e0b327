/**
 * Conditions from XML: the nouns of the JSON document as elements. Schema: docs/conditions.xsd.
 *
 * An element stands for the key of its name; a number is its text, a list of numbers is separated by spaces, a
 * temperature says its unit in an attribute. Entities are not needed and a DOCTYPE is refused. What comes out is the
 * same plain object the JSON document is, and goes through the same schema of @graybody/core/record.
 */
import { type DescribedConditions, type LayerMakers, readConditionsDocument } from '@graybody/core/record';
import { XMLParser, XMLValidator } from 'fast-xml-parser';
import { ArrayError } from './errors.js';

/** Namespace of the document. */
export const conditionsNamespace = 'urn:graybody:conditions:1';

/** Longest document taken, in characters. */
const longestDocument = 1 << 20;
/** Deepest nesting taken; a real one has seven levels. */
const deepest = 16;

/** Elements whose content is words, not numbers. */
const words: ReadonlySet<string> = new Set([
  'lens',
  'calibrationDate',
  'percentOf',
  'distribution',
  'radianceUnit',
  'detector',
  'reflectedMeasuredAt',
]);
/** Elements that hold a list of elements, in order. */
const lists: ReadonlySet<string> = new Set(['path', 'areas', 'points']);
const temperatureUnits: readonly string[] = ['celsius', 'kelvin', 'fahrenheit'];

/** A node as fast-xml-parser gives it with `preserveOrder`. */
type Node = Readonly<Record<string, unknown>>;

interface Element {
  readonly name: string;
  readonly attributes: Readonly<Record<string, string>>;
  readonly children: readonly Element[];
  readonly text: string;
  /** Place in the document: `path/window/temperature`. */
  readonly place: string;
}

/**
 * Reads conditions from an XML document.
 *
 * @param makers - As for `readConditionsDocument`: `{ humidAir }` of `@graybody/core/atmosphere` for documents with
 *   computed air.
 * @throws {ArrayError} `malformed`, `unsupported`, `limit-exceeded` for what is no sound document of the schema.
 * @throws {MeasurementError} what `readConditionsDocument` throws, with the path of what is at fault.
 */
export function readConditionsXml(
  document: string | Uint8Array,
  makers: LayerMakers = {},
): DescribedConditions {
  return readConditionsDocument(conditionsObjectFromXml(document), makers);
}

/**
 * The plain object an XML document stands for, not yet checked against the schema of conditions.
 *
 * @throws {ArrayError} `malformed`, `unsupported`, `limit-exceeded`.
 */
export function conditionsObjectFromXml(document: string | Uint8Array): unknown {
  const root = parseRoot(textOf(document));
  const { version, xmlns, ...others } = root.attributes;
  if (root.name !== 'conditions' || xmlns !== conditionsNamespace) {
    throw malformed(
      'root',
      `<conditions version="1" xmlns="${conditionsNamespace}">`,
      `<${root.name} xmlns="${xmlns ?? ''}">`,
    );
  }
  for (const name of Object.keys(others)) {
    if (!name.startsWith('xmlns:') && !name.startsWith('xsi:')) throw unknownAttribute(root, name);
  }
  return { format: 'graybody-conditions', version: numberOrText(version ?? ''), ...members(root) };
}

function textOf(document: unknown): string {
  if (typeof document !== 'string' && !(document instanceof Uint8Array)) {
    throw new ArrayError('wrong-option', {
      path: 'document',
      expected: 'XML as text or bytes',
      received: document,
    });
  }
  if (document.length > longestDocument) {
    throw new ArrayError('limit-exceeded', {
      path: 'document',
      expected: `at most ${longestDocument} characters`,
      received: document.length,
    });
  }
  if (typeof document === 'string') return document.replace(/^\uFEFF/, '');
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(document);
  } catch (cause) {
    throw new ArrayError('malformed', { path: 'document', expected: 'UTF-8', received: document, cause });
  }
}

function parseRoot(text: string): Element {
  if (/<!DOCTYPE|<!ENTITY/i.test(text)) {
    throw new ArrayError('unsupported', {
      path: 'document',
      expected: 'XML without a DOCTYPE',
      received: 'a DOCTYPE',
      hint: 'Take it out; the document needs no entities of its own.',
    });
  }
  const verdict = XMLValidator.validate(text);
  if (verdict !== true) {
    const { line, col, msg } = verdict.err;
    throw malformed(`line ${line}, column ${col}`, 'well-formed XML', msg);
  }
  let nodes: readonly Node[];
  try {
    nodes = parser().parse(text) as readonly Node[];
  } catch (cause) {
    throw new ArrayError('malformed', {
      path: 'document',
      expected: 'well-formed XML',
      received: (cause as Error).message,
      cause,
    });
  }
  const roots = nodes.filter((node) => !('#text' in node) && !Object.keys(node)[0]!.startsWith('?'));
  if (roots.length !== 1) throw malformed('document', 'one root element', `${roots.length}`);
  return elementOf(roots[0]!, '', 0);
}

function parser(): XMLParser {
  return new XMLParser({
    preserveOrder: true,
    ignoreAttributes: false,
    attributeNamePrefix: '',
    parseTagValue: false,
    parseAttributeValue: false,
    trimValues: true,
    processEntities: {
      enabled: true,
      maxTotalExpansions: 1000,
      maxExpandedLength: 65_536,
      maxEntityCount: 1,
    },
    // An empty table, which is what makes numeric references (&#176;) be decoded and no names of HTML.
    htmlEntities: {} as boolean,
  });
}

function elementOf(node: Node, above: string, depth: number): Element {
  const name = Object.keys(node).find((key) => key !== ':@')!;
  const place = above === '' ? name : `${above}/${name}`;
  if (depth > deepest) throw malformed(place, `at most ${deepest} levels`, 'more');
  if (!/^[a-z][A-Za-z0-9-]*$/.test(name)) throw malformed(place, 'an element of the schema', `<${name}>`);
  const content = node[name] as readonly Node[];
  const attributes = (node[':@'] ?? {}) as Readonly<Record<string, string>>;
  const inner = content.filter((child) => !('#text' in child));
  const text = content
    .filter((child) => '#text' in child)
    .map((child) => String(child['#text']))
    .join(' ')
    .trim();
  if (inner.length > 0 && text !== '') throw malformed(place, 'elements or text, not both', text);
  const within = depth === 0 ? '' : place;
  return {
    name,
    attributes,
    text,
    place,
    children: inner.map((child) => elementOf(child, within, depth + 1)),
  };
}

/** What an element stands for. */
function contentOf(element: Element): unknown {
  const { name, attributes, children, text } = element;
  if (name === 'origins') return originsOf(element);
  if (lists.has(name)) {
    allow(element);
    return children.map((child) =>
      itemOf(child, element.place.startsWith('uncertainties') || element.place.includes('/uncertainties/')),
    );
  }
  if (name === 'band' || name === 'region') {
    allow(element, 'kind', 'form');
    return { ...attributes, ...members(element) };
  }
  if (children.length > 0) {
    allow(element);
    return members(element);
  }
  if ('unit' in attributes) {
    allow(element, 'unit');
    const unit = attributes.unit!;
    if (!temperatureUnits.includes(unit)) {
      throw malformed(`${element.place}/@unit`, temperatureUnits.join(', '), unit);
    }
    return { [unit]: numberOrText(text) };
  }
  allow(element);
  if (words.has(name)) return text;
  // An element without content is an empty group; a number is missing then, which the schema says.
  if (text === '') return {};
  const tokens = text.split(/\s+/);
  return tokens.length === 1 ? numberOrText(text) : tokens.map(numberOrText);
}

/** An element of a list: a layer, an area, a point. */
function itemOf(item: Element, inUncertainties: boolean): unknown {
  if (item.name === 'area') {
    allow(item, 'name');
    return { ...item.attributes, ...members(item) };
  }
  allow(item);
  if (item.name === 'point' || inUncertainties) return members(item);
  return { kind: item.name, ...members(item) };
}

/** The children of an element by name; each name once. */
function members(element: Element): Record<string, unknown> {
  const entries = new Map<string, unknown>();
  for (const child of element.children) {
    if (entries.has(child.name)) throw malformed(child.place, 'the element once', 'twice');
    entries.set(child.name, contentOf(child));
  }
  if (element.text !== '') throw malformed(element.place, 'elements', element.text);
  return Object.fromEntries(entries);
}

/** `<origin of="emissivity">measured with tape</origin>`: the keys are paths, so they stand in an attribute. */
function originsOf(element: Element): Record<string, string> {
  allow(element);
  const entries = new Map<string, string>();
  for (const child of element.children) {
    const of = child.attributes.of ?? '';
    allow(child, 'of');
    if (child.name !== 'origin' || of === '' || entries.has(of)) {
      throw malformed(
        child.place,
        '<origin of="emissivity">…</origin>, each input once',
        `<${child.name} of="${of}">`,
      );
    }
    entries.set(of, child.text);
  }
  return Object.fromEntries(entries);
}

function allow(element: Element, ...names: string[]): void {
  const other = Object.keys(element.attributes).find((name) => !names.includes(name));
  if (other !== undefined) throw unknownAttribute(element, other);
}

function unknownAttribute({ place, attributes }: Element, name: string): ArrayError {
  return new ArrayError('malformed', {
    path: `${place}/@${name}`,
    expected: 'no such attribute',
    received: attributes[name],
    hint: `Write it as an element: <${name}>${attributes[name]}</${name}>.`,
  });
}

/** A number where the text is one; anything else stays text for the schema to refuse with its place. */
function numberOrText(text: string): number | string {
  return /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(text) ? Number(text) : text;
}

function malformed(path: string, expected: string, received: string): ArrayError {
  return new ArrayError('malformed', { path, expected, received });
}
