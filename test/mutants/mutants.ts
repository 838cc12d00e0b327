/** One-line mutations of packages/core/src, and for each the check of `checks.ts` that must notice it. */

/** A replacement that must match exactly once. */
export interface Mutant {
  readonly name: string;
  /** Below packages/core/src. */
  readonly file: string;
  readonly from: string;
  readonly to: string;
  /** Name of a check. */
  readonly killedBy: string;
}

const layerLine =
  'offset = transmittance * offset + emittance * x[step.emitted]! + reflectance * x[step.mirrored]!;';
const explicitLine = 'offset = transmittance * offset + x[step.emitted]! + x[step.mirrored]!;';
const surfaceLine = 'offset = reflectance * offset + transmittance * x[surface.background]!;';

/** The mutants. */
export const mutants: readonly Mutant[] = [
  // Sign of each term of the offset.
  {
    name: 'reflected radiance taken with the wrong sign',
    file: 'measurement-equation.ts',
    from: surfaceLine,
    to: 'offset = -reflectance * offset + transmittance * x[surface.background]!;',
    killedBy: 'nine correction cases',
  },
  {
    name: 'background behind the target taken with the wrong sign',
    file: 'measurement-equation.ts',
    from: surfaceLine,
    to: 'offset = reflectance * offset - transmittance * x[surface.background]!;',
    killedBy: 'measurement vectors',
  },
  {
    name: 'emission of a layer taken with the wrong sign',
    file: 'measurement-equation.ts',
    from: layerLine,
    to: 'offset = transmittance * offset - emittance * x[step.emitted]! + reflectance * x[step.mirrored]!;',
    killedBy: 'nine correction cases',
  },
  {
    name: 'what a layer mirrors taken with the wrong sign',
    file: 'measurement-equation.ts',
    from: layerLine,
    to: 'offset = transmittance * offset + emittance * x[step.emitted]! - reflectance * x[step.mirrored]!;',
    killedBy: 'path case D1: order and reflectance',
  },
  {
    name: 'what lies behind a layer taken with the wrong sign',
    file: 'measurement-equation.ts',
    from: layerLine,
    to: 'offset = -transmittance * offset + emittance * x[step.emitted]! + reflectance * x[step.mirrored]!;',
    killedBy: 'nine correction cases',
  },
  {
    name: 'path radiance taken with the wrong sign',
    file: 'measurement-equation.ts',
    from: explicitLine,
    to: 'offset = transmittance * offset - x[step.emitted]! + x[step.mirrored]!;',
    killedBy: 'measurement vectors',
  },
  {
    name: 'what a selective layer mirrors taken with the wrong sign',
    file: 'measurement-equation.ts',
    from: explicitLine,
    to: 'offset = transmittance * offset + x[step.emitted]! - x[step.mirrored]!;',
    killedBy: 'measurement vectors',
  },
  {
    name: 'the offset added in the inverse instead of taken off',
    file: 'model.ts',
    from: 'const radiance = (seen - actual.offset) / actual.gain;',
    to: 'const radiance = (seen + actual.offset) / actual.gain;',
    killedBy: 'nine correction cases',
  },
  {
    name: 'the offset taken off in the forward direction instead of added',
    file: 'model.ts',
    from: 'const seen = actual.gain * engine.equation.targetBand.exact.radiance(surface) + actual.offset;',
    to: 'const seen = actual.gain * engine.equation.targetBand.exact.radiance(surface) - actual.offset;',
    killedBy: 'measurement vectors',
  },
  {
    name: 'the offset of recorded settings taken with the wrong sign',
    file: 'model.ts',
    from: 'recorded.equation.targetBand.exact.radiance(reading) + recorded.offset;',
    to: 'recorded.equation.targetBand.exact.radiance(reading) - recorded.offset;',
    killedBy: 'recorrection vectors',
  },
  {
    name: 'the offset added in a frame instead of taken off',
    file: 'frame.ts',
    from: 'const radiance = (seen - actual.affine.offset) / actual.affine.gain;',
    to: 'const radiance = (seen + actual.affine.offset) / actual.affine.gain;',
    killedBy: 'frame vectors',
  },

  // The path.
  {
    name: 'the path walked from the wrong end',
    file: 'measurement-equation.ts',
    from: 'for (const step of steps) {',
    to: 'for (const step of [...steps].reverse()) {',
    killedBy: 'path case D1: order and reflectance',
  },
  {
    name: 'the path before the surface: a layer that does not dim what is behind it',
    file: 'measurement-equation.ts',
    from: 'gain *= transmittance;',
    to: '',
    killedBy: 'nine correction cases',
  },
  {
    name: 'reflectance left out of the emittance of a layer',
    file: 'measurement-equation.ts',
    from: 'const emittance = 1 - transmittance - reflectance;',
    to: 'const emittance = 1 - transmittance;',
    killedBy: 'path case D1: order and reflectance',
  },
  {
    name: 'reflectance left out of the emittance of a selective layer',
    file: 'measurement-equation.ts',
    from: '1 - passed.at(wavelength) - mirrored.at(wavelength);',
    to: '1 - passed.at(wavelength);',
    killedBy: 'measurement vectors',
  },
  {
    name: 'temperature of a layer and mirrored temperature exchanged',
    file: 'measurement-equation.ts',
    from: layerLine,
    to: 'offset = transmittance * offset + emittance * x[step.mirrored]! + reflectance * x[step.emitted]!;',
    killedBy: 'path case D1: order and reflectance',
  },
  {
    name: 'transmittance of the target left out of what it mirrors',
    file: 'measurement-equation.ts',
    from: 'const reflectance = 1 - gain - transmittance;',
    to: 'const reflectance = 1 - gain;',
    killedBy: 'measurement vectors',
  },

  // Planck's law.
  {
    name: 'λ⁻⁴ in place of λ⁻⁵',
    file: 'planck.ts',
    from: 'return c1L / (squared * squared * wavelength) / Math.expm1(c2 / (wavelength * temperature));',
    to: 'return c1L / (squared * squared) / Math.expm1(c2 / (wavelength * temperature));',
    killedBy: 'table of spectral radiance',
  },
  {
    name: 'λ⁴ in place of λ⁵ in the spectral temperature',
    file: 'planck.ts',
    from: 'wavelength ** 5 * radiance',
    to: 'wavelength ** 4 * radiance',
    killedBy: 'table of spectral radiance',
  },
  {
    name: 'λ⁴ in place of λ⁵ in the closed form of a single wavelength',
    file: 'kernel.ts',
    from: 'const scale = (weight * c1L) / wavelength ** 5;',
    to: 'const scale = (weight * c1L) / wavelength ** 4;',
    killedBy: 'single wavelength',
  },
  {
    name: 'Wien’s approximation in place of Planck’s law',
    file: 'planck.ts',
    from: 'return c1L / (squared * squared * wavelength) / Math.expm1(c2 / (wavelength * temperature));',
    to: 'return c1L / (squared * squared * wavelength) / Math.exp(c2 / (wavelength * temperature));',
    killedBy: 'table of spectral radiance',
  },
  {
    name: 'the slope without its 1 − e⁻ˣ',
    file: 'planck.ts',
    from: 'return (planck(wavelength, temperature) * x) / temperature / -Math.expm1(-x);',
    to: 'return (planck(wavelength, temperature) * x) / temperature;',
    killedBy: 'table of spectral radiance',
  },
  {
    name: 'the Jacobian of cm⁻¹ left out',
    file: 'planck.ts',
    from: ' * (wavelength / wavenumber);',
    to: ';',
    killedBy: 'spectral vectors',
  },
  {
    name: 'the photon factor left out of the photon radiance',
    file: 'planck.ts',
    from: 'return wavelength / photonEnergyMicrometre;',
    to: 'return 1 / photonEnergyMicrometre;',
    killedBy: 'spectral vectors',
  },
  {
    name: 'the photon factor left out of a band’s photon radiance',
    file: 'band.ts',
    from: '* photonsPerJoule(rule.node[i]!) *',
    to: '* photonsPerJoule(1) *',
    killedBy: 'table of in-band radiance',
  },
  {
    name: 'a term of the band fraction lost',
    file: 'planck.ts',
    from: '(6 * x) / n ** 3 + 6 / n ** 4',
    to: '(6 * x) / n ** 3',
    killedBy: 'table of band fractions',
  },

  // Constants and units.
  {
    name: '273.16 in place of 273.15',
    file: 'units.ts',
    from: 'export const zeroCelsius = 273.15;',
    to: 'export const zeroCelsius = 273.16;',
    killedBy: 'zero Celsius',
  },
  {
    name: '273 in place of 273.15',
    file: 'units.ts',
    from: 'export const zeroCelsius = 273.15;',
    to: 'export const zeroCelsius = 273;',
    killedBy: 'zero Celsius',
  },
  {
    name: 'h with two digits exchanged',
    file: 'constants.ts',
    from: '6.62607015e-34',
    to: '6.62607051e-34',
    killedBy: 'radiation constants',
  },
  {
    name: 'k of CODATA 2014',
    file: 'constants.ts',
    from: '1.380649e-23',
    to: '1.38064852e-23',
    killedBy: 'radiation constants',
  },
  {
    name: 'peak of the radiance per frequency in place of that per wavelength',
    file: 'constants.ts',
    from: 'secondRadiationConstant / 4.965114231744276',
    to: 'secondRadiationConstant / 2.821439372122079',
    killedBy: 'radiation constants',
  },

  // Bands.
  {
    name: 'the photon factor left out of the responsivity',
    file: 'band.ts',
    from: 'at: (wavelength) => (response.at(wavelength) * wavelength) / middle,',
    to: 'at: (wavelength) => response.at(wavelength),',
    killedBy: 'path case P1: photon detector',
  },
  {
    name: 'the photon factor upside down',
    file: 'band.ts',
    from: 'at: (wavelength) => (response.at(wavelength) * wavelength) / middle,',
    to: 'at: (wavelength) => (response.at(wavelength) * middle) / wavelength,',
    killedBy: 'path case P1: photon detector',
  },
  {
    name: 'the photon factor relative to the upper limit',
    file: 'band.ts',
    from: 'const middle = (response.breakpoints[0]! + response.breakpoints.at(-1)!) / 2;',
    to: 'const middle = response.breakpoints.at(-1)!;',
    killedBy: 'band vectors',
  },
  {
    name: 'a weighted band renormalised',
    file: 'band.ts',
    from: 'return spectralBand(joined, descriptor);',
    to: 'const sum = wavelengthRule(joined.breakpoints, joined.at).weight.reduce((a, b) => a + b, 0) / wavelengthRule(joined.breakpoints, band.responsivity.at).weight.reduce((a, b) => a + b, 0); return spectralBand({ breakpoints: joined.breakpoints, at: (w) => joined.at(w) / sum }, descriptor);',
    killedBy: 'path case S1: selective surface',
  },
  {
    name: 'a sampled response renormalised to a peak of 1',
    file: 'curve.ts',
    from: 'return y[low]! + share * (y[high]! - y[low]!);',
    to: 'return (y[low]! + share * (y[high]! - y[low]!)) / Math.max(...y);',
    killedBy: 'weighting of one half',
  },
  {
    name: 'a response in cm⁻¹ made linear in µm',
    file: 'curve.ts',
    from: ': (wavelength: number): number => interpolate(wavenumberFromWavelength(wavelength)),',
    to: ': linear([...abscissa].reverse().map(wavelengthFromWavenumber), [...value].reverse()),',
    killedBy: 'band vectors',
  },
  {
    name: 'a step of a curve rounded off',
    file: 'curve.ts',
    from: 'if (x[middle]! <= at) low = middle;',
    to: 'if (x[middle]! < at - 0.5) low = middle;',
    killedBy: 'path case S1: selective surface',
  },
  {
    name: 'the inverse stopped after a coarse step',
    file: 'kernel.ts',
    from: 'if (inside && Math.abs(kelvin - previous) <= 1e-7 * kelvin) return kelvin;',
    to: 'if (inside && Math.abs(kelvin - previous) <= 1e-2 * kelvin) return kelvin;',
    killedBy: 'table of in-band radiance',
  },
  {
    name: 'K1 and K2 exchanged',
    file: 'kernel.ts',
    from: '? closedForm(calibration.k1, c2 / calibration.k2, 0, from, to)',
    to: '? closedForm(calibration.k2, c2 / calibration.k1, 0, from, to)',
    killedBy: 'satellite figures',
  },
  {
    name: 'b of Sakuma–Hattori with the wrong sign',
    file: 'kernel.ts',
    from: 'c / Math.expm1(c2 / (a * temperature + b));',
    to: 'c / Math.expm1(c2 / (a * temperature - b));',
    killedBy: 'Sakuma–Hattori figures',
  },
  {
    name: 'too few nodes in the quadrature',
    file: 'quadrature.ts',
    from: 'const order = 4 + Math.ceil(',
    to: 'const order = 1 + Math.ceil(',
    killedBy: 'band vectors',
  },
  {
    name: 'the table of a frame read without its slopes',
    file: 'table.ts',
    from: 'return a * v * v * (1 + 2 * u) + b * u * u * (1 + 2 * v) + u * v * (v * slopeA - u * slopeB);',
    to: 'return a * v + b * u;',
    killedBy: 'frame vectors',
  },

  // Sensitivities.
  {
    name: 'sensitivity to emissivity without the surroundings',
    file: 'measurement-equation.ts',
    from: 'partial[surface.emissivity]! += after[0]! * (targetRadiance - reflected);',
    to: 'partial[surface.emissivity]! += after[0]! * targetRadiance;',
    killedBy: 'sensitivity vectors',
  },
  {
    name: 'sensitivity to a transmittance without the layer’s own emission',
    file: 'measurement-equation.ts',
    from: '(radiance - (step.gray ? emitted : 0))',
    to: 'radiance',
    killedBy: 'sensitivity vectors',
  },
  {
    name: 'sensitivities with the sign of the reading',
    file: 'model.ts',
    from: 'result[name] = -value * perRadiance;',
    to: 'result[name] = value * perRadiance;',
    killedBy: 'sensitivity vectors',
  },
];
