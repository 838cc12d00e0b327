import { spawnSync } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { isMeasurementError } from '@graybody/core';
import { humidAir } from '@graybody/core/atmosphere';
import { readConditionsDocument } from '@graybody/core/record';
import { describe, expect, it } from 'vitest';
import { isArrayError } from '../src/errors.js';
import { conditionsObjectFromXml, readConditionsXml } from '../src/xml.js';
import { documents, xmlOf } from './support/conditions-xml.js';
import { inFolder, seeded } from './support/fixtures.js';

const head = '<conditions version="1" xmlns="urn:graybody:conditions:1">';
const least =
  '<band kind="top-hat"><from>8</from><to>14</to></band><emissivity>0.9</emissivity><reflectedApparentTemperature unit="celsius">21</reflectedApparentTemperature>';
const documentOf = (inside: string): string =>
  `<?xml version="1.0" encoding="UTF-8"?>\n${head}${inside}</conditions>\n`;

describe('XML and JSON say the same', () => {
  it.each(Object.keys(documents))('%s', (name) => {
    const json = documents[name]!;
    const xml = xmlOf(json);
    expect(conditionsObjectFromXml(xml)).toEqual(json);
    const bytes = new TextEncoder().encode(`\uFEFF<?xml version="1.0"?><!-- a note -->${xml}`);
    const fromXml = readConditionsXml(bytes, { humidAir });
    const fromJson = readConditionsDocument(json, { humidAir });
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
