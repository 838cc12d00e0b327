import { spawnSync } from 'node:child_process';
import { readFileSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { isMeasurementError } from '@graybody/core';
import { readConditionsDocument } from '@graybody/core/record';
import { describe, expect, it } from 'vitest';
import { isArrayError } from '../src/errors.js';
import { conditionsObjectFromXml, readConditionsXml } from '../src/xml.js';
import { fixture, inFolder, seeded } from './support/fixtures.js';

const head = '<conditions version="1" xmlns="urn:graybody:conditions:1">';
const least =
  '<band kind="top-hat"><from>8</from><to>14</to></band><emissivity>0.9</emissivity><reflectedApparentTemperature unit="celsius">21</reflectedApparentTemperature>';
const documentOf = (inside: string): string =>
  `<?xml version="1.0" encoding="UTF-8"?>\n${head}${inside}</conditions>\n`;

/** A JSON document as XML by the rule "a key is an element": written here anew, shares nothing with the reader. */
function xmlOf(json: Record<string, unknown>): string {
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
const documents: Record<string, Record<string, unknown>> = {
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

describe('XML and JSON say the same', () => {
  it.each(Object.keys(documents))('%s', (name) => {
    const json = documents[name]!;
    const xml = xmlOf(json);
    expect(conditionsObjectFromXml(xml)).toEqual(json);
    const fromXml = readConditionsXml(
      new TextEncoder().encode(`\uFEFF<?xml version="1.0"?><!-- a note -->${xml}`),
    );
    const fromJson = readConditionsDocument(json);
    expect(JSON.stringify(fromXml)).toBe(JSON.stringify(fromJson));
  });

  it('numeric references are decoded, attributes of schema places ignored at the root', () => {
    const xml = documentOf(`${least}<instrument><lens>24&#176; &#x3bc; &amp;</lens></instrument>`).replace(
      '<conditions ',
      '<conditions xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance" xsi:schemaLocation="urn:graybody:conditions:1 conditions.xsd" ',
    );
    expect(readConditionsXml(xml).conditions.instrument?.lens).toBe('24° μ &');
  });
});

describe('what is no document of the schema', () => {
  it.each([
    ['nothing', '', 'malformed'],
    ['text', 'hello', 'malformed'],
    ['an open element', head, 'malformed'],
    ['crossed elements', `${head}<a><b></a></b></conditions>`, 'malformed'],
    ['two roots', `${documentOf(least)}${head}</conditions>`, 'malformed'],
    ['another root', '<settings/>', 'malformed'],
    ['no namespace', '<conditions version="1"></conditions>', 'malformed'],
    ['another namespace', '<conditions version="1" xmlns="urn:x"></conditions>', 'malformed'],
    ['an element of another namespace', documentOf('<x:band xmlns:x="urn:x"/>'), 'malformed'],
    ['an element twice', documentOf(`${least}<emissivity>0.8</emissivity>`), 'malformed'],
    ['text beside elements', documentOf(`${least} 21`), 'malformed'],
    [
      'text beside elements below',
      documentOf('<surface>x<transmittance>1</transmittance></surface>'),
      'malformed',
    ],
    ['text in a list', documentOf(`${least}<path><air>0.9</air></path>`), 'malformed'],
    [
      'a number in an attribute',
      documentOf('<band kind="top-hat" from="8"/>').replace('kind', 'x:kind'),
      'malformed',
    ],
    ['an attribute on a layer', documentOf(`${least}<path><air transmittance="0.9"/></path>`), 'malformed'],
    [
      'an attribute on the root',
      documentOf(least).replace('version="1" xmlns', 'author="me" version="1" xmlns'),
      'malformed',
    ],
    [
      'an attribute on a group',
      documentOf(`${least}<instrument name="x"><ifov>1</ifov></instrument>`),
      'malformed',
    ],
    [
      'a strange unit',
      documentOf('<reflectedApparentTemperature unit="rankine">5</reflectedApparentTemperature>'),
      'malformed',
    ],
    [
      'an origin without its input',
      documentOf(`${least}<origins><origin>tape</origin></origins>`),
      'malformed',
    ],
    [
      'an origin twice',
      documentOf(
        `${least}<origins><origin of="emissivity">a</origin><origin of="emissivity">b</origin></origins>`,
      ),
      'malformed',
    ],
    ['__proto__', documentOf(`${least}<__proto__><polluted>1</polluted></__proto__>`), 'malformed'],
    ['constructor', documentOf(`${least}<constructor>1</constructor>`), 'malformed'],
    ['a DOCTYPE', `<!DOCTYPE conditions [<!ENTITY a "aaaa">]>${documentOf(least)}`, 'unsupported'],
    ['a doctype in small letters', `<!doctype conditions>${documentOf(least)}`, 'unsupported'],
    [
      'entities that multiply',
      `<!DOCTYPE a [<!ENTITY a "ha"><!ENTITY b "&a;&a;&a;&a;">]>${documentOf('<lens>&b;</lens>')}`,
      'unsupported',
    ],
    ['great depth', documentOf(`${'<surface>'.repeat(40)}${'</surface>'.repeat(40)}`), 'malformed'],
    ['very great depth', `${'<a>'.repeat(20_000)}${'</a>'.repeat(20_000)}`, 'malformed'],
    ['a flood of text', documentOf(' '.repeat(1 << 20)), 'limit-exceeded'],
    ['bytes that are no UTF-8', Uint8Array.of(0x3c, 0xff, 0xfe, 0x3e), 'malformed'],
    ['a number', 42, 'wrong-option'],
  ] as const)('%s', (_, xml, code) => {
    const start = performance.now();
    try {
      conditionsObjectFromXml(xml as string);
      expect.unreachable();
    } catch (error) {
      if (!isArrayError(error)) throw error;
      expect(error.code, error.message).toBe(code);
    }
    expect(performance.now() - start).toBeLessThan(2000);
    expect(({} as { polluted?: unknown }).polluted).toBeUndefined();
  });

  it.each([
    ['an unknown element', documentOf(`${least}<emisivity>0.9</emisivity>`), 'unknown-key', 'emisivity'],
    ['a decimal comma', documentOf(least.replace('0.9', '0,9')), 'wrong-type', 'emissivity'],
    ['a percentage', documentOf(least.replace('0.9', '90')), 'out-of-range', 'emissivity'],
    ['a number in hexadecimal', documentOf(least.replace('0.9', '0x1')), undefined, 'emissivity'],
    [
      'an empty element',
      documentOf(least.replace('<emissivity>0.9</emissivity>', '<emissivity/>')),
      undefined,
      'emissivity',
    ],
    [
      'a temperature without its unit',
      documentOf(least.replace(' unit="celsius"', '')),
      undefined,
      'reflectedApparentTemperature',
    ],
    [
      'a newer version',
      documentOf(least).replace('version="1" xmlns', 'version="2" xmlns'),
      'wrong-version',
      'version',
    ],
    ['no version', documentOf(least).replace('version="1" xmlns', 'xmlns'), undefined, 'version'],
    [
      'no emissivity',
      documentOf(least.replace('<emissivity>0.9</emissivity>', '')),
      'missing-input',
      'emissivity',
    ],
    [
      'two wavelengths of one',
      documentOf(
        least.replace(/<band.*<\/band>/, '<band kind="monochromatic"><wavelength>8 9</wavelength></band>'),
      ),
      undefined,
      undefined,
    ],
  ])('%s is refused by the one schema', (_, xml, code, path) => {
    try {
      readConditionsXml(xml);
      expect.unreachable();
    } catch (error) {
      if (!isMeasurementError(error)) throw error;
      if (code !== undefined) expect(error.code, error.message).toBe(code);
      if (path !== undefined) expect(error.path).toMatch(new RegExp(`^${path}`));
    }
  });

  it('flipped bits and cut documents give a typed error or sound conditions', () => {
    const whole = new TextEncoder().encode(xmlOf(documents['everything else']!));
    const random = seeded(20260122);
    for (let round = 0; round < 1500; round++) {
      const bytes = round % 3 === 0 ? whole.slice(0, random() % whole.length) : whole.slice();
      if (round % 3 !== 0) {
        const place = random() % bytes.length;
        bytes[place] = bytes[place]! ^ (1 << (random() % 8));
      }
      try {
        expect(readConditionsXml(bytes).conditions.band.radianceUnit).toBe('W·m⁻²·sr⁻¹');
      } catch (error) {
        if (!isArrayError(error) && !isMeasurementError(error)) throw error;
      }
    }
  });
});

const hasXmllint = spawnSync('xmllint', ['--version'], { stdio: 'ignore' }).status === 0;
if (!hasXmllint)
  process.stderr.write(
    '\nSKIPPED: validation against docs/conditions.xsd needs xmllint, which is not on this machine.\n',
  );

describe.skipIf(!hasXmllint)('the published schema, by xmllint', () => {
  const schema = fileURLToPath(new URL('../../../docs/conditions.xsd', import.meta.url));
  const verdict = async (xml: string): Promise<{ status: number | null; text: string }> =>
    inFolder(async (folder) => {
      writeFileSync(`${folder}/a.xml`, xml);
      const { status, stderr } = spawnSync(
        'xmllint',
        ['--nonet', '--noout', '--schema', schema, `${folder}/a.xml`],
        { encoding: 'utf8' },
      );
      return { status, text: stderr };
    });

  it.each(Object.keys(documents))('accepts %s', async (name) => {
    const { status, text } = await verdict(xmlOf(documents[name]!));
    expect(status, text).toBe(0);
  });

  it.each([
    ['an unknown element', documentOf(`${least}<emisivity>0.9</emisivity>`)],
    ['no emissivity', documentOf(least.replace('<emissivity>0.9</emissivity>', ''))],
    ['a temperature without its unit', documentOf(least.replace(' unit="celsius"', ''))],
    ['an element twice', documentOf(`${least}<emissivity>0.8</emissivity>`)],
    ['another namespace', documentOf(least).replace(':1"', ':2"')],
  ])('refuses %s, as the reader does', async (_, xml) => {
    expect((await verdict(xml)).status).not.toBe(0);
    expect(() => readConditionsXml(xml)).toThrow();
  });
});
