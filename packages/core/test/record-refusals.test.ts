import { describe, it } from 'vitest';
import { readConditionsDocument } from '../src/record.js';
import { paintedDocument as minimal, refused } from './support/measurement.js';

const read = (changes: object) => readConditionsDocument({ ...minimal, ...changes });

describe('a document at fault: the path, what was expected, what to write', () => {
  it('another format, a newer version', () => {
    refused(
      () => read({ version: 2 }),
      'wrong-version',
      'version',
      'graybody-conditions of version 1',
      'got 2',
      'update @graybody/core',
    );
    refused(() => read({ version: 0 }), 'out-of-range', 'version', 'version 1');
    refused(() => read({ version: undefined }), 'missing-input', 'version');
    refused(() => read({ format: 'graybody-result' }), 'out-of-range', 'format', "'graybody-conditions'");
    refused(() => readConditionsDocument(null), 'wrong-type', '', 'an object');
    refused(() => readConditionsDocument('{}'), 'wrong-type', '', 'an object');
    refused(() => readConditionsDocument([]), 'wrong-type', '', 'an object');
    refused(() => readConditionsDocument(undefined), 'missing-input', '', 'an object');
  });

  it('unknown keys, the nearest known one named, at any depth', () => {
    refused(() => read({ emisivity: 0.9 }), 'unknown-key', 'emisivity', "Did you mean 'emissivity'?");
    refused(
      () => read({ band: { ...minimal.band, detecter: 'photon' } }),
      'unknown-key',
      'band.detecter',
      "'detector'",
    );
    refused(
      () => read({ path: [{ kind: 'air', transmitance: 0.9, temperature: { celsius: 20 } }] }),
      'unknown-key',
      'path[0].transmitance',
      "'transmittance'",
    );
    refused(
      () => read({ reflectedApparentTemperature: { celcius: 21 } }),
      'unknown-key',
      'reflectedApparentTemperature.celcius',
      "'celsius'",
    );
    const region = { kind: 'rectangle', row: 0, colum: 0, height: 1, width: 1 };
    refused(
      () => read({ areas: [{ name: 'a', region, conditions: {} }] }),
      'unknown-key',
      'areas[0].region.colum',
      "'column'",
    );
    refused(
      () => read({ uncertainties: { emissivity: { halfwidth: 0.1 } } }),
      'unknown-key',
      'uncertainties.emissivity.halfwidth',
      "'halfWidth'",
    );
    refused(
      () => read({ instrument: { accuracy: { kelvins: 1 } } }),
      'unknown-key',
      'instrument.accuracy.kelvins',
      "'kelvin'",
    );
  });

  it('percents, bare numbers for temperatures, texts for numbers', () => {
    refused(() => read({ emissivity: 86 }), 'out-of-range', 'emissivity', 'Write 0.86 for 86 %.');
    refused(() => read({ emissivity: 0 }), 'out-of-range', 'emissivity', '0 < emissivity ≤ 1');
    refused(() => read({ emissivity: '0.86' }), 'wrong-type', 'emissivity', 'a ratio of 0…1');
    refused(
      () => read({ path: [{ kind: 'air', transmittance: 97, temperature: { celsius: 18 } }] }),
      'out-of-range',
      'path[0].transmittance',
      'Write 0.97 for 97 %.',
    );
    refused(
      () => read({ reflectedApparentTemperature: 21 }),
      'wrong-type',
      'reflectedApparentTemperature',
      '{ "celsius": 21 }',
    );
    refused(
      () => read({ reflectedApparentTemperature: '21 °C' }),
      'wrong-type',
      'reflectedApparentTemperature',
      'with its unit',
    );
    refused(
      () => read({ reflectedApparentTemperature: { celsius: '21' } }),
      'wrong-type',
      'reflectedApparentTemperature.celsius',
    );
    refused(
      () => read({ reflectedApparentTemperature: { kelvin: 21 } }),
      'out-of-range',
      'reflectedApparentTemperature',
      'celsius(21)',
    );
    refused(
      () => read({ path: [{ kind: 'air', transmittance: 0.9, temperature: 18 }] }),
      'wrong-type',
      'path[0].temperature',
      'with its unit',
    );
  });

  it('what is missing, what contradicts', () => {
    refused(() => read({ emissivity: undefined }), 'missing-input', 'emissivity');
    refused(() => read({ band: undefined }), 'missing-input', 'band', '"top-hat"');
    refused(
      () => read({ reflectedApparentTemperature: undefined }),
      'missing-input',
      'reflectedApparentTemperature',
      'exactly one of',
    );
    refused(
      () => read({ reflectedRadiance: 40 }),
      'conflicting-inputs',
      'reflectedApparentTemperature',
      'exactly one of',
    );
    refused(
      () => read({ path: [{ kind: 'air', transmittance: 0.9 }] }),
      'missing-input',
      'path[0].temperature',
      'the layer emits',
    );
    const window = {
      kind: 'window',
      transmittance: 0.8,
      reflectance: 0.3,
      temperature: { celsius: 20 },
      mirroredTemperature: { celsius: 20 },
    };
    refused(
      () => read({ path: [window] }),
      'out-of-range',
      'path[0].reflectance',
      'transmittance + reflectance ≤ 1',
    );
    refused(
      () => read({ surface: { transmittance: 0.5, backgroundApparentTemperature: { celsius: 20 } } }),
      'out-of-range',
      'surface.transmittance',
      'emissivity + transmittance ≤ 1',
    );
    refused(
      () => read({ path: [{ kind: 'glass', transmittance: 0.9 }] }),
      'out-of-range',
      'path[0]',
      "'window'",
      'The kind given is "glass".',
    );
    refused(() => read({ path: {} }), 'wrong-type', 'path', 'from target to instrument');
    refused(
      () => read({ band: { kind: 'top-hat', from: 14, to: 8 } }),
      'out-of-range',
      'band.to',
      'above from = 14 µm',
    );
    refused(() => read({ band: { kind: 'top-hat', from: '8', to: 14 } }), 'wrong-type', 'band.from');
    refused(() => read({ band: 'LW' }), 'wrong-type', 'band', 'a band such as');
    refused(() => read({ band: { kind: 'calibrated', form: 'k1k3' } }), 'out-of-range', 'band');
    refused(() => read({ areas: {} }), 'wrong-type', 'areas', 'expected a list, got');
    refused(
      () => read({ instrument: { lens: 25 } }),
      'wrong-type',
      'instrument.lens',
      'expected a text, got 25',
    );
    refused(
      () => read({ instrument: { accuracy: { percent: 2, percentOf: 'kelvins' } } }),
      'out-of-range',
      'instrument.accuracy.percentOf',
      "one of 'celsius', 'kelvin', 'range', got \"kelvins\"",
    );
    refused(
      () => read({ emissivity: { wavelength: [8, 14] } }),
      'missing-input',
      'emissivity.value',
      'a list of numbers',
    );
  });

  it('in an area and in recorded settings', () => {
    const region = { kind: 'rectangle', row: 0, column: 0, height: 1, width: 1 };
    const area = (changes: object) => () =>
      read({ areas: [{ name: 'a', region, conditions: {}, ...changes }] });
    refused(area({ region: { ...region, height: 0 } }), 'out-of-range', 'areas[0].region.height', '> 0');
    refused(
      area({ region: { kind: 'polygon', points: [] } }),
      'out-of-range',
      'areas[0].region.points',
      'three or more points',
    );
    refused(
      area({ region: { kind: 'circle' } }),
      'out-of-range',
      'areas[0].region',
      'rectangle, ellipse or polygon',
    );
    refused(
      area({ conditions: { emissivity: 30 } }),
      'out-of-range',
      'areas[0].conditions.emissivity',
      'Write 0.3 for 30 %.',
    );
    refused(
      area({ conditions: { path: [{ kind: 'air', transmittance: 0.5 }] } }),
      'missing-input',
      'areas[0].conditions.path[0].temperature',
    );
    refused(area({ conditions: { band: minimal.band } }), 'unknown-key', 'areas[0].conditions.band');
    refused(area({ name: 5 }), 'wrong-type', 'areas[0].name');
    const recorded = { emissivity: 0.95, reflectedApparentTemperature: { celsius: 20 } };
    refused(
      () => read({ recorded: { ...recorded, emissivity: 95 } }),
      'out-of-range',
      'recorded.emissivity',
      'Write 0.95',
    );
    refused(
      () => read({ recorded: { ...recorded, path: [{ kind: 'air', transmittance: 0.9 }] } }),
      'missing-input',
      'recorded.path[0].temperature',
    );
    refused(
      () => read({ recorded: { emissivity: 0.95 } }),
      'missing-input',
      'recorded.reflectedApparentTemperature',
    );
    refused(
      () => read({ recorded: { ...recorded, resolution: -1 } }),
      'out-of-range',
      'recorded.resolution',
      'a step > 0',
    );
  });
});
