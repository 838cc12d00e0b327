/**
 * Named checks of the core against figures from outside. Each takes the module namespace, so that the same check runs
 * on the library and on a mutated copy of it, and throws where they disagree. Sources: fixtures/reference/README.md,
 * fixtures/README.md; the mark is repeated beside each check.
 */
import { readFileSync } from 'node:fs';
import type * as core from '@graybody/core';

/** What `@graybody/core` exports. */
export type Core = typeof core;

/** A check: throws when the library disagrees with the figure. */
export type Check = (library: Core) => void;

function fixture(path: string): string {
  return readFileSync(new URL(`../../fixtures/${path}`, import.meta.url), 'utf8');
}

/** Rows of a CSV file of numbers, by column. */
function rows(path: string): readonly (readonly number[])[] {
  return fixture(path)
    .trim()
    .split(/\r?\n/)
    .slice(1)
    .map((line) => line.split(',').map(Number));
}

/** Throws unless |value − reference| ≤ tolerance; NaN never is. */
function near(value: number, reference: number, tolerance: number, what: string): void {
  if (Math.abs(value - reference) <= tolerance) return;
  throw new Error(`${what}: ${value} instead of ${reference}, tolerance ${tolerance}`);
}

/** Throws unless they agree to a relative tolerance. */
function close(value: number, reference: number, relative: number, what: string): void {
  near(value, reference, relative * Math.abs(reference), what);
}

// Published: SI Brochure, ITS-90; the °C and K columns of inband-radiance.csv.
const zeroCelsius: Check = ({ celsius, toCelsius, kelvin }) => {
  near(celsius(0), 273.15, 1e-12, '0 °C');
  for (const [, , degrees, temperature] of rows('reference/inband-radiance.csv')) {
    near(celsius(degrees!), temperature!, 1e-9, `${degrees} °C`);
    near(toCelsius(kelvin(temperature!)), degrees!, 1e-9, `${temperature} K`);
  }
};

// Published: CODATA 2018 and 2022, 15 digits.
const constants: Check = (library) => {
  close(library.firstRadiationConstant, 3.74177185219276e-16, 5e-15, 'c₁');
  close(library.secondRadiationConstant * 1e-6, 1.43877687750393e-2, 5e-15, 'c₂');
  close(library.stefanBoltzmannConstant, 5.67037441918443e-8, 5e-15, 'σ');
  close(library.wienDisplacementConstant * 1e-6, 2.89777195518517e-3, 5e-15, 'b');
  close(library.blackbodyExitance(library.kelvin(300)), 5.67037441918443e-8 * 300 ** 4, 1e-14, 'M at 300 K');
  close(library.peakWavelength(library.kelvin(300)), 2897.77195518517 / 300, 1e-14, 'peak at 300 K');
};

// Computed; astropy 5.2.1 agrees to 1.3e-14.
const spectralTable: Check = ({ spectralRadiance, spectralRadianceSlope, spectralTemperature, kelvin }) => {
  for (const [wavelength, , temperature, radiance, slope] of rows('reference/spectral-radiance.csv')) {
    const at = `${wavelength} µm, ${temperature} K`;
    close(spectralRadiance(wavelength!, kelvin(temperature!)), radiance!, 1e-12, at);
    close(spectralRadianceSlope(wavelength!, kelvin(temperature!)), slope!, 1e-12, `slope at ${at}`);
    close(spectralTemperature(wavelength!, radiance!), temperature!, 1e-12, `temperature at ${at}`);
  }
};

// Computed: fixtures/generate/vectors.py, 45-digit arithmetic.
const spectralVectors: Check = (library) => {
  const vectors = JSON.parse(fixture('vectors/spectral.json'));
  for (const row of vectors.per_wavenumber) {
    const { wavenumber_per_cm: wavenumber, temperature_K: temperature } = row;
    close(
      library.spectralRadiancePerWavenumber(wavenumber, library.kelvin(temperature)),
      row.spectral_radiance_W_m2_sr_per_cm,
      1e-12,
      `${wavenumber} cm⁻¹, ${temperature} K`,
    );
  }
  for (const row of vectors.per_wavelength) {
    const { wavelength_um: wavelength, temperature_K: temperature } = row;
    close(
      library.spectralPhotonRadiance(wavelength, library.kelvin(temperature)),
      row.photon_spectral_radiance_per_s_m2_sr_um,
      1e-12,
      `photons at ${wavelength} µm, ${temperature} K`,
    );
  }
};

// Computed; the handbook rows (from memory) differ by less than 5e-5.
const bandFractions: Check = ({ bandFraction }) => {
  for (const [product, fraction] of rows('reference/band-fraction.csv')) {
    close(bandFraction(product!), fraction!, 1e-9, `F(${product} µm·K)`);
  }
};

// Computed twice: exponential series and 40-digit quadrature.
const inBandTable: Check = ({ topHatBand, kelvin }) => {
  for (const [from, to, , temperature, radiance, slope, photons] of rows('reference/inband-radiance.csv')) {
    const band = topHatBand(from!, to!);
    const at = `${from}–${to} µm, ${temperature} K`;
    close(band.radiance(kelvin(temperature!)), radiance!, 1e-10, at);
    close(band.slope(kelvin(temperature!)), slope!, 1e-10, `slope, ${at}`);
    close(band.photonRadiance(kelvin(temperature!)), photons!, 1e-10, `photons, ${at}`);
    near(band.temperature(radiance!), temperature!, 1e-6, `temperature, ${at}`);
  }
};

// Computed: fixtures/generate/vectors.py; flat and sampled bands, in µm and cm⁻¹, energy and photon detectors.
const bandVectors: Check = ({ bandFromDescriptor, kelvin }) => {
  for (const { name, band: descriptor, rows: list } of JSON.parse(fixture('vectors/bands.json')).bands) {
    const band = bandFromDescriptor(descriptor);
    for (const row of list) {
      const temperature = kelvin(row.temperature_K);
      close(band.radiance(temperature), row.radiance_W_m2_sr, 1e-12, `${name}, ${temperature} K`);
      close(band.slope(temperature), row.slope_W_m2_sr_K, 1e-12, `slope, ${name}, ${temperature} K`);
    }
  }
};

// Computed: the table of spectral radiance; a band of one wavelength must give it, and turn it back (1e-6 K).
const singleWavelength: Check = ({ monochromaticBand, kelvin }) => {
  for (const [wavelength, , temperature, radiance, slope] of rows('reference/spectral-radiance.csv')) {
    const band = monochromaticBand(wavelength!);
    const at = `${wavelength} µm, ${temperature} K`;
    close(band.radiance(kelvin(temperature!)), radiance!, 1e-12, at);
    close(band.slope(kelvin(temperature!)), slope!, 1e-12, `slope, ${at}`);
    near(band.temperature(radiance!), temperature!, 1e-6, `temperature, ${at}`);
  }
};

// Computed: the table of in-band radiance, halved. A weight, and a response, are used as given.
const weightingOfOneHalf: Check = ({ sampledBand, topHatBand, kelvin }) => {
  for (const [from, to, , temperature, radiance] of rows('reference/inband-radiance.csv')) {
    const half = [0.5, 0.5, 0.5];
    const wavelength = [from!, (from! + to!) / 2, to!];
    const sampled = sampledBand({ wavelength, responsivity: half });
    const weighted = topHatBand(from!, to!).weightedBy({ wavelength, value: half });
    for (const band of [sampled, weighted]) {
      close(
        band.radiance(kelvin(temperature!)),
        radiance! / 2,
        1e-10,
        `half of ${from}–${to} µm, ${temperature} K`,
      );
    }
  }
};

// Constants published in fixtures/satellite/metadata.txt; brightness temperatures computed with NumPy, 7 decimals.
const satellite: Check = ({ calibratedBand }) => {
  const scene = JSON.parse(fixture('satellite/scene.json')).bands;
  const expected = JSON.parse(fixture('satellite/expected.json')).bands;
  for (const [i, { k1, k2 }] of scene.entries()) {
    const band = calibratedBand({ form: 'k1k2', k1, k2 });
    for (const place of ['least', 'greatest', 'at_20_20']) {
      const radiance = expected[i].radiance_W_m2_sr_um[place];
      near(
        band.temperature(radiance),
        expected[i].brightness_temperature_K[place],
        1e-6,
        `${place}, band ${i}`,
      );
    }
  }
};

// Computed: errors of the Planckian form, published in CCT-WG5 2008, to first order.
const sakumaHattori: Check = ({ calibratedBand, topHatBand, celsius }) => {
  for (const row of JSON.parse(fixture('reference/sakuma-hattori.json'))) {
    const band = calibratedBand({ form: 'sakuma-hattori', a: row.A_um, b: row.B_umK, c: row.C_tied_at_100C });
    const truth = topHatBand(row.band[0], row.band[1]);
    for (const [i, degrees] of row.t_C.entries()) {
      const temperature = celsius(degrees);
      const error = (band.radiance(temperature) - truth.radiance(temperature)) / truth.slope(temperature);
      near(error, row.err_K_formulaAB_C_at_100C[i], 1e-9, `${row.band} µm at ${degrees} °C`);
    }
  }
};

// biome-ignore lint/suspicious/noExplicitAny: cases are plain JSON of several shapes, checked by what they give.
type Json = any;

/** Conditions of a case of fixtures/vectors/measurement.json. */
function conditionsOf(library: Core, given: Json): core.Conditions {
  const { band, path, surface, recorded: _recorded, ...rest } = given;
  const number = (value: Json): Json => value?.kelvin ?? value;
  return {
    ...Object.fromEntries(Object.entries(rest).map(([key, value]) => [key, number(value)])),
    ...(band ? { band: library.bandFromDescriptor(band) } : {}),
    ...(surface
      ? {
          surface: {
            ...surface,
            backgroundApparentTemperature: number(surface.backgroundApparentTemperature),
          },
        }
      : {}),
    ...(path
      ? {
          path: path.map(({ kind, ...layer }: Json) => {
            const make = { air: library.air, window: library.infraredWindow, layer: library.layer }[
              kind as 'air' | 'window' | 'layer'
            ] as (input: Json) => core.Layer;
            return make(
              Object.fromEntries(Object.entries(layer).map(([key, value]) => [key, number(value)])),
            );
          }),
        }
      : {}),
  } as Json;
}

// Computed: fixtures/generate/vectors.py, wavelength by wavelength in 45-digit arithmetic. 1e-6 K.
const measurementVectors: Check = (library) => {
  for (const item of JSON.parse(fixture('vectors/measurement.json')).cases) {
    const model = library.measurementModel(conditionsOf(library, item.conditions));
    const truth = library.kelvin(item.true_temperature_K);
    const apparent = library.kelvin(item.apparent_temperature_K);
    near(model.apparentTemperature(truth), apparent, 1e-6, `${item.name}, forward`);
    near(model.surfaceTemperature(apparent), truth, 1e-6, `${item.name}, inverse`);
  }
};

// The same file. Derivatives by differences, 1e-6 relative, or 1e-6 K per unit where they are small.
const sensitivityVectors: Check = (library) => {
  for (const item of JSON.parse(fixture('vectors/measurement.json')).cases) {
    const model = library.measurementModel(conditionsOf(library, item.conditions));
    const found = model.sensitivities(library.kelvin(item.apparent_temperature_K));
    for (const [name, value] of Object.entries<number>(item.sensitivities)) {
      near(found[name]!, value, 1e-6 * Math.max(1, Math.abs(value)), `${item.name}, ${name}`);
    }
  }
};

// The same file: a frame gives what the equation gives, within 0.1 mK and one float32 ulp (6e-5 K at 700 K).
const frameVectors: Check = (library) => {
  for (const item of JSON.parse(fixture('vectors/measurement.json')).cases) {
    const model = library.measurementModel(conditionsOf(library, item.conditions));
    const frame = library.view(Float64Array.of(item.apparent_temperature_K), [1, 1]);
    const { temperature } = model.surfaceFrame(frame);
    near(temperature.data[0]!, item.true_temperature_K, 1e-4 + 1.3e-4, `${item.name}, frame`);
  }
};

// The same file: six recorrections.
const recorrectionVectors: Check = (library) => {
  for (const item of JSON.parse(fixture('vectors/measurement.json')).recorrection_cases) {
    const actual = conditionsOf(library, item.conditions);
    const recorded = conditionsOf(library, item.conditions.recorded);
    const model = library.recorrection(recorded as Json, actual);
    const stored = library.kelvin(item.recorded_temperature_K);
    near(model.surfaceTemperature(stored), item.true_temperature_K, 1e-6, `${item.name}, inverse`);
    near(
      model.recordedTemperature(library.kelvin(item.true_temperature_K)),
      stored,
      1e-6,
      `${item.name}, forward`,
    );
  }
};

/** Conditions of a case of correction-cases.json: air, then window. */
function ninefold(library: Core, item: Json): core.Conditions {
  const { celsius } = library;
  const path: core.Layer[] = [];
  if (item.t_atm_C !== null) {
    path.push(library.air({ transmittance: item.tau_atm, temperature: celsius(item.t_atm_C) }));
  }
  if (item.t_window_C !== null) {
    path.push(
      library.infraredWindow({ transmittance: item.tau_window, temperature: celsius(item.t_window_C) }),
    );
  }
  return {
    band: library.topHatBand(item.band_um[0], item.band_um[1]),
    emissivity: item.emissivity,
    reflectedApparentTemperature: celsius(item.t_reflected_C),
    path,
  };
}

// Computed with 30 digits; astropy agrees to 8e-15. 1e-6 K.
const correctionCases: Check = (library) => {
  for (const item of JSON.parse(fixture('reference/correction-cases.json')).cases) {
    const model = library.measurementModel(ninefold(library, item));
    const apparent = library.celsius(item.t_apparent_C);
    near(model.surfaceTemperature(apparent), library.celsius(item.t_object_C), 1e-6, item.name);
  }
};

// Computed with 30 digits: the three cases that catch a reversed path, a dropped reflectance, a selective surface
// treated as gray, an energy detector taken for a photon one.
function pathCase(name: string, conditions: (library: Core, item: Json) => core.Conditions): Check {
  return (library) => {
    const { path_cases: cases } = JSON.parse(fixture('reference/correction-cases.json'));
    const item = cases.find((each: Json) => each.name.startsWith(name));
    const model = library.measurementModel(conditions(library, item));
    const apparent = library.celsius(item.t_apparent_C);
    near(model.surfaceTemperature(apparent), library.celsius(item.t_object_C), 1e-6, item.name);
  };
}

const pathOrder = pathCase('D1', (library, item) => ({
  band: library.topHatBand(8, 14),
  emissivity: item.emissivity,
  reflectedApparentTemperature: library.celsius(item.t_reflected_C),
  path: item.path.map(({ kind, transmittance, reflectance, t_C, t_mirrored_C }: Json) =>
    kind === 'air'
      ? library.air({ transmittance, temperature: library.celsius(t_C) })
      : library.infraredWindow({
          transmittance,
          reflectance,
          temperature: library.celsius(t_C),
          mirroredTemperature: library.celsius(t_mirrored_C),
        }),
  ),
}));

const selectiveSurface = pathCase('S1', (library, item) => ({
  band: library.topHatBand(8, 14),
  emissivity: { wavelength: [8, 10, 10, 14], value: [0.3, 0.3, 0.9, 0.9] },
  reflectedApparentTemperature: library.celsius(item.t_reflected_C),
}));

const photonDetector = pathCase('P1', (library, item) => ({
  band: library.topHatBand(8, 14, { detector: 'photon' }),
  emissivity: item.emissivity,
  reflectedApparentTemperature: library.celsius(item.t_reflected_C),
}));

/** All checks, by name, in the order in which they are asked which of them notices a mutant. */
export const checks: Readonly<Record<string, Check>> = {
  'zero Celsius': zeroCelsius,
  'radiation constants': constants,
  'table of spectral radiance': spectralTable,
  'spectral vectors': spectralVectors,
  'table of band fractions': bandFractions,
  'table of in-band radiance': inBandTable,
  'band vectors': bandVectors,
  'single wavelength': singleWavelength,
  'weighting of one half': weightingOfOneHalf,
  'satellite figures': satellite,
  'Sakuma–Hattori figures': sakumaHattori,
  'nine correction cases': correctionCases,
  'path case D1: order and reflectance': pathOrder,
  'path case S1: selective surface': selectiveSurface,
  'path case P1: photon detector': photonDetector,
  'measurement vectors': measurementVectors,
  'sensitivity vectors': sensitivityVectors,
  'frame vectors': frameVectors,
  'recorrection vectors': recorrectionVectors,
};
