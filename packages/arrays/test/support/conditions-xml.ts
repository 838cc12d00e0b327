/**
 * Conditions documents that between them have every key of the schema, and a writer of XML.
 */
import { readFileSync } from 'node:fs';
import { fixture } from './fixtures.js';

/** A JSON document as XML by the rule "a key is an element": written here anew, shares nothing with the reader. */
export function xmlOf(json: Record<string, unknown>): string {
  const escaped = (text: unknown): string => String(text).replace(/&/g, '&amp;').replace(/</g, '&lt;');
  const attribute = (text: unknown): string => escaped(text).replace(/"/g, '&quot;');
  const element = (key: string, value: unknown, inUncertainties: boolean): string => {
    if (key === 'origins') {
      const all = Object.entries(value as object);
      return `<origins>${all.map(([of, text]) => `<origin of="${attribute(of)}">${escaped(text)}</origin>`).join('')}</origins>`;
    }
    if (Array.isArray(value)) {
      if (typeof value[0] === 'number') return `<${key}>${value.join(' ')}</${key}>`;
      const names: Record<string, (item: Record<string, unknown>) => string> = {
        points: () => 'point',
        areas: ({ name }) => `area name="${attribute(name)}"`,
        path: ({ kind }) => (inUncertainties ? 'layer' : String(kind)),
      };
      const items = value.map((item) => {
        const { kind: _kind, name: _name, ...rest } = item;
        const tag = names[key]!(item);
        return `<${tag}>${inner(rest, inUncertainties)}</${tag.split(' ')[0]}>`;
      });
      return `<${key}>${items.join('')}</${key}>`;
    }
    if (typeof value !== 'object' || value === null) return `<${key}>${escaped(value)}</${key}>`;
    const entries = Object.entries(value);
    const isTemperature =
      entries.length === 1 &&
      ['celsius', 'kelvin', 'fahrenheit'].includes(entries[0]![0]) &&
      key !== 'accuracy';
    if (isTemperature) return `<${key} unit="${entries[0]![0]}">${entries[0]![1]}</${key}>`;
    const attributes = entries.filter(
      ([name]) => (name === 'kind' || name === 'form') && (key === 'band' || key === 'region'),
    );
    const rest = Object.fromEntries(entries.filter((entry) => !attributes.includes(entry)));
    const text = attributes.map(([name, word]) => ` ${name}="${word}"`).join('');
    return `<${key}${text}>${inner(rest, inUncertainties || key === 'uncertainties')}</${key}>`;
  };
  const inner = (value: Record<string, unknown>, inUncertainties: boolean): string =>
    Object.entries(value)
      .map(([key, one]) => element(key, one, inUncertainties))
      .join('\n');
  const { format: _format, version, ...rest } = json;
  return `<conditions version="${version}" xmlns="urn:graybody:conditions:1">\n${inner(rest, false)}\n</conditions>`;
}

/** Documents that between them have every key of the schema. */
export const documents: Record<string, Record<string, unknown>> = {
  'everything else': {
    format: 'graybody-conditions',
    version: 1,
    band: {
      kind: 'weighted',
      band: { kind: 'sampled', wavelength: [8, 10, 14], responsivity: [0, 1, 0.5], detector: 'photon' },
      curve: { wavelength: [7, 15], value: [0.9, 0.8] },
    },
    emissivity: { wavelength: [7, 15], value: [0.9, 0.95] },
    reflectedApparentTemperature: { kelvin: 294 },
    path: [
      { kind: 'air', transmittance: 0.97, temperature: { fahrenheit: 70 } },
      {
        kind: 'window',
        transmittance: 0.7,
        reflectance: { low: 0.1, high: 0.2 },
        temperature: { celsius: 30 },
        mirroredTemperature: { kelvin: 296 },
      },
    ],
    viewAngle: 30,
    reflectedMeasuredAt: 'target',
    instrument: {
      measuringRange: { from: { celsius: -20 }, to: { celsius: 120 } },
      netd: { value: 0.05, sceneTemperature: { celsius: 30 } },
      accuracy: { kelvin: 2, percent: 2, percentOf: 'celsius' },
      ifov: 1.4,
      lens: '007 <24°> & more',
      calibrationDate: '2026-01-12',
      warmUp: 900,
    },
    origins: { emissivity: 'tape & foil', 'path[0].transmittance': 'assumed < 1' },
    uncertainties: {
      apparent: 0.5,
      emissivity: { halfWidth: 0.03, distribution: 'rectangular' },
      reflectedApparentTemperature: { standard: 1 },
      path: [{ transmittance: 0.01 }, {}],
    },
    areas: [
      {
        name: 'flange "A"',
        region: { kind: 'rectangle', row: 1, column: 2, height: 3, width: 4 },
        conditions: { emissivity: 0.5 },
      },
      {
        name: 'cap',
        region: { kind: 'ellipse', centre: { row: 5, column: 5 }, semiAxes: { row: 2, column: 2.5 } },
        conditions: { reflectedApparentTemperature: { celsius: 21 } },
        uncertainties: { emissivity: 0.1 },
      },
      {
        name: 'plate',
        region: {
          kind: 'polygon',
          points: [
            { row: 0, column: 0 },
            { row: 0, column: 9 },
            { row: 9, column: 0 },
          ],
        },
        conditions: { path: [{ kind: 'air', transmittance: 1, temperature: { celsius: 20 } }] },
      },
    ],
  },
  'a film, recorded settings': {
    format: 'graybody-conditions',
    version: 1,
    band: { kind: 'top-hat', from: 8, to: 14 },
    emissivity: 0.6,
    reflectedApparentTemperature: { celsius: 21 },
    surface: { transmittance: 0.2, backgroundApparentTemperature: { celsius: 35 } },
    uncertainties: {
      recorded: 0.5,
      surface: { transmittance: 0.02, backgroundApparentTemperature: 1 },
      reflectedApparentTemperature: 2,
    },
    recorded: {
      emissivity: 0.95,
      reflectedApparentTemperature: { celsius: 20 },
      path: [{ kind: 'air', transmittance: 1, temperature: { celsius: 20 } }],
      resolution: 0.1,
    },
  },
  'calibrated with k1 and k2': {
    format: 'graybody-conditions',
    version: 1,
    band: {
      kind: 'calibrated',
      form: 'k1k2',
      k1: 774.8853,
      k2: 1321.0789,
      radianceUnit: 'W·m⁻²·sr⁻¹·µm⁻¹',
      range: { from: 250, to: 350 },
    },
    emissivity: 0.97,
    reflectedRadiance: 1.65,
    path: [{ kind: 'layer', transmittance: 0.85, pathRadiance: 1.08 }],
    uncertainties: {
      reflectedRadiance: { standard: 0.6 },
      path: [{ transmittance: 0.06, pathRadiance: { expanded: 0.9, coverageFactor: 2 } }],
    },
  },
  'Sakuma–Hattori': {
    format: 'graybody-conditions',
    version: 1,
    band: { kind: 'calibrated', form: 'sakuma-hattori', a: 9.5, b: 200, c: 1e6 },
    emissivity: 1,
    reflectedApparentTemperature: { celsius: 20 },
  },
  'computed air': {
    format: 'graybody-conditions',
    version: 1,
    band: { kind: 'top-hat', from: 8, to: 12 },
    emissivity: 0.9,
    reflectedApparentTemperature: { celsius: 20 },
    path: [
      {
        kind: 'humid-air',
        temperature: { celsius: 18 },
        relativeHumidity: 0.6,
        distance: 40,
        pressure: 101325,
        carbonDioxide: 0.00042,
        visibility: 20,
      },
    ],
  },
  'one wavelength': {
    format: 'graybody-conditions',
    version: 1,
    band: { kind: 'monochromatic', wavelength: 10.6 },
    emissivity: 1,
    reflectedApparentTemperature: { celsius: 20 },
  },
  'over wavenumber': {
    format: 'graybody-conditions',
    version: 1,
    band: { kind: 'sampled', wavenumber: [700, 1000, 1250], responsivity: [0, 1, 0] },
    emissivity: 1,
    reflectedApparentTemperature: { celsius: 20 },
  },
  ...Object.fromEntries(
    [
      'compressor/conditions',
      'compressor/recorded',
      'switch-cabinet/conditions',
      'switch-cabinet/recorded',
      'oven-front/conditions',
    ].map((name) => [name, JSON.parse(readFileSync(fixture(`ice-works/${name}.json`), 'utf8'))]),
  ),
};
