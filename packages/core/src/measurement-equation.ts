/**
 * The measurement equation: between a target and a detector everything is an affine map of band radiance,
 *
 *     L_instrument = gain · targetBand.radiance(T) + offset            [METHOD.md eq. 10–13]
 *
 * built from the surface, ε·L(T) + (1 − ε − τ)·L(T_refl) + τ·L(T_bg), and the layers of the path, each
 * τ·L + (1 − τ − ρ)·L(T_layer) + ρ·L(T_mirrored). Gray factors go into gain and offset. A curve over wavelength
 * goes into the weight of the band instead, of the target's and of every source behind it, so it is exact.
 */
import { type Band, reweighted } from './band.js';
import type { Conditions } from './conditions.js';
import { type Curve, isCurve, mapped, product, type SpectralFunction, spectralFunction } from './curve.js';
import { MeasurementError } from './errors.js';
import type { Layer } from './layer.js';
import type { Scalar } from './scalar.js';

/** What kind of number an input is, and so which values it may take. */
export type InputKind = 'positive ratio' | 'ratio' | 'temperature' | 'radiance' | 'curve';

/** One input of the equation. Its value sits at `slot` of the vector x: a ratio, or a radiance. */
export interface EquationInput {
  readonly name: string;
  readonly kind: InputKind;
  readonly value: Scalar | Curve;
  /** For a temperature: the band that turns it into the radiance x holds. */
  readonly band: Band;
  readonly slot: number;
  /** For a curve of the path: the layer it belongs to. */
  readonly layer?: number;
}

/** A layer as slots of x. Where `gray` is false, emitted and mirrored radiance come weighted already. */
interface Step {
  readonly gray: boolean;
  readonly transmittance: number;
  readonly reflectance: number;
  readonly emitted: number;
  readonly mirrored: number;
}

/** The equation of one set of conditions, ready to be evaluated on a vector x of its inputs. */
export interface MeasurementEquation {
  readonly band: Band;
  readonly targetBand: Band;
  readonly inputs: readonly EquationInput[];
  readonly surface: {
    readonly gray: boolean;
    readonly emissivity: number;
    readonly transmittance: number;
    readonly reflected: number;
    readonly background: number;
  };
  readonly steps: readonly Step[];
  readonly slots: number;
}

/** Gain and offset; both NaN where the inputs contradict each other (ε + τ > 1, τ + ρ > 1). */
export interface Affine {
  gain: number;
  offset: number;
}

const ZERO = 0;
const ONE = 1;
/** Forgives the rounding of sums such as 0.7 + 0.3. */
const sumTolerance = 1e-7;

/** Builds the equation. Inputs are taken as checked by `checkedConditions`. */
export function measurementEquation(conditions: Conditions): MeasurementEquation {
  const { band, emissivity, surface, path = [] } = conditions;
  const inputs: EquationInput[] = [];
  const add = (
    name: string,
    kind: InputKind,
    value: Scalar | Curve | undefined,
    of: Band = band,
    at?: number,
  ): number => {
    if (value === undefined) return ZERO;
    const slot = inputs.length + 2;
    inputs.push({ name, kind, value, band: of, slot, ...(at === undefined ? {} : { layer: at }) });
    return slot;
  };

  const steps: Step[] = [];
  let behind = band; // the band weighted by every curve nearer to the instrument
  for (let k = path.length - 1; k >= 0; k--) {
    const layer = path[k]!;
    const name = `path[${k}]`;
    layer.checkBand?.(band);
    const transmittance = layer.transmittanceBehind(path.slice(k + 1));
    if (layer.pathRadiance !== undefined && behind !== band)
      throw radianceBehindCurve(`${name}.pathRadiance`);
    if (isCurve(transmittance) || isCurve(layer.reflectance)) {
      const { through, emitted, mirrored } = spectralLayer(layer, transmittance, behind, name);
      add(`${name}.transmittance`, 'curve', transmittance, behind, k);
      if (layer.reflectance !== 0) add(`${name}.reflectance`, 'curve', layer.reflectance, behind, k);
      steps.unshift({
        gray: false,
        transmittance: ONE,
        reflectance: ZERO,
        emitted:
          layer.pathRadiance === undefined
            ? add(`${name}.temperature`, 'temperature', layer.temperature, emitted)
            : add(`${name}.pathRadiance`, 'radiance', layer.pathRadiance),
        mirrored: add(`${name}.mirroredTemperature`, 'temperature', layer.mirroredTemperature, mirrored),
      });
      behind = through;
      continue;
    }
    const explicit = layer.pathRadiance !== undefined;
    const mirrors = layer.reflectance !== 0;
    steps.unshift({
      gray: !explicit,
      transmittance: add(`${name}.transmittance`, 'positive ratio', transmittance, behind),
      reflectance: mirrors ? add(`${name}.reflectance`, 'ratio', layer.reflectance) : ZERO,
      emitted: explicit
        ? add(`${name}.pathRadiance`, 'radiance', layer.pathRadiance)
        : add(`${name}.temperature`, 'temperature', layer.temperature, behind),
      mirrored: mirrors
        ? add(`${name}.mirroredTemperature`, 'temperature', layer.mirroredTemperature, behind)
        : ZERO,
    });
  }

  if (conditions.reflectedRadiance !== undefined && behind !== band)
    throw radianceBehindCurve('reflectedRadiance');
  const curve = isCurve(emissivity) ? spectralFunction(emissivity, 'emissivity') : undefined;
  const reflectedBand = curve
    ? weightedInside(
        behind,
        mapped(curve, (value) => 1 - value),
      )
    : behind;
  const emissivityInput = curve
    ? add('emissivity', 'curve', emissivity, behind)
    : add('emissivity', 'positive ratio', emissivity);
  const slots = {
    gray: curve === undefined,
    // A curve is in the weight of the target's band already: what is left of it is 1.
    emissivity: curve ? ONE : emissivityInput,
    reflected:
      conditions.reflectedRadiance === undefined
        ? add(
            'reflectedApparentTemperature',
            'temperature',
            conditions.reflectedApparentTemperature,
            reflectedBand,
          )
        : add('reflectedRadiance', 'radiance', conditions.reflectedRadiance),
    transmittance: add('surface.transmittance', 'ratio', surface?.transmittance),
    background: add(
      'surface.backgroundApparentTemperature',
      'temperature',
      surface?.backgroundApparentTemperature,
      behind,
    ),
  };
  // The path was walked from the instrument; inputs are listed from the target.
  const rank = ({ name }: EquationInput): number =>
    name.startsWith('path[') ? Number.parseInt(name.slice(5), 10) : -1;
  inputs.sort((a, b) => rank(a) - rank(b));
  return {
    band,
    targetBand: curve ? behind.weightedBy(emissivity as Curve) : behind,
    inputs,
    surface: slots,
    steps,
    slots: inputs.length + 2,
  };
}

/** Gain and offset for the input vector x.   [METHOD.md eq. 12] */
export function compose({ surface, steps }: MeasurementEquation, x: Float64Array, out: Affine): void {
  let gain = x[surface.emissivity]!;
  let offset = x[surface.reflected]!;
  if (surface.gray) {
    const transmittance = x[surface.transmittance]!;
    const reflectance = 1 - gain - transmittance;
    offset = reflectance * offset + transmittance * x[surface.background]!;
    if (reflectance < -sumTolerance) offset = Number.NaN;
  }
  for (const step of steps) {
    const transmittance = x[step.transmittance]!;
    const reflectance = x[step.reflectance]!;
    gain *= transmittance;
    if (step.gray) {
      const emittance = 1 - transmittance - reflectance;
      offset = transmittance * offset + emittance * x[step.emitted]! + reflectance * x[step.mirrored]!;
      if (emittance < -sumTolerance) offset = Number.NaN;
    } else {
      offset = transmittance * offset + x[step.emitted]! + x[step.mirrored]!;
    }
  }
  out.gain = Number.isNaN(offset) ? Number.NaN : gain;
  out.offset = offset;
}

/** One part of the radiance at the instrument. */
export interface RadianceTerm {
  /** What it comes from: `target`, `reflected surroundings`, `path[0]` … */
  readonly name: string;
  /** In the unit of the band. */
  readonly radiance: number;
  /** Share of the whole, 0…1. */
  readonly share: number;
}

/** The parts of the radiance at the instrument, target first. Their sum is the whole. */
export function radianceTerms(
  equation: MeasurementEquation,
  x: Float64Array,
  targetRadiance: number,
): RadianceTerm[] {
  const { surface, steps } = equation;
  const after = transmittancesAfter(equation, x);
  const emissivity = x[surface.emissivity]!;
  const transmittance = surface.gray ? x[surface.transmittance]! : 0;
  const reflectance = surface.gray ? 1 - emissivity - transmittance : 1;
  const parts: [name: string, radiance: number][] = [
    ['target', after[0]! * emissivity * targetRadiance],
    ['reflected surroundings', after[0]! * reflectance * x[surface.reflected]!],
  ];
  if (transmittance > 0)
    parts.push(['background through the target', after[0]! * transmittance * x[surface.background]!]);
  steps.forEach((step, k) => {
    const emittance = step.gray ? 1 - x[step.transmittance]! - x[step.reflectance]! : 1;
    const mirror = step.gray ? x[step.reflectance]! : 1;
    parts.push([`path[${k}]`, after[k + 1]! * (emittance * x[step.emitted]! + mirror * x[step.mirrored]!)]);
  });
  const whole = parts.reduce((sum, [, radiance]) => sum + radiance, 0);
  return parts.map(([name, radiance]) => ({ name, radiance, share: radiance / whole }));
}

/**
 * ∂L_instrument/∂x for every slot, at a radiance of the target in its own band.   [METHOD.md eq. 14]
 * Slots of curves stay 0: their derivatives need other bands, see `curveDerivative` in sensitivity.ts.
 */
export function partialDerivatives(
  equation: MeasurementEquation,
  x: Float64Array,
  targetRadiance: number,
): Float64Array {
  const { surface, steps } = equation;
  const after = transmittancesAfter(equation, x);
  const partial = new Float64Array(equation.slots);
  const emissivity = x[surface.emissivity]!;
  const reflected = x[surface.reflected]!;
  const transmittance = x[surface.transmittance]!;
  const background = x[surface.background]!;
  let radiance = emissivity * targetRadiance + reflected; // L after the surface, then after each layer
  if (surface.gray) {
    partial[surface.emissivity]! += after[0]! * (targetRadiance - reflected);
    partial[surface.transmittance]! += after[0]! * (background - reflected);
    partial[surface.reflected]! += after[0]! * (1 - emissivity - transmittance);
    partial[surface.background]! += after[0]! * transmittance;
    radiance =
      emissivity * targetRadiance + (1 - emissivity - transmittance) * reflected + transmittance * background;
  } else {
    partial[surface.reflected]! += after[0]!;
  }
  steps.forEach((step, k) => {
    const beyond = after[k + 1]!;
    const emitted = x[step.emitted]!;
    const mirrored = x[step.mirrored]!;
    const passed = x[step.transmittance]!;
    const mirror = x[step.reflectance]!;
    partial[step.transmittance]! += beyond * (radiance - (step.gray ? emitted : 0));
    partial[step.reflectance]! += beyond * (mirrored - emitted);
    partial[step.emitted]! += beyond * (step.gray ? 1 - passed - mirror : 1);
    partial[step.mirrored]! += beyond * (step.gray ? mirror : 1);
    radiance =
      passed * radiance +
      (step.gray ? (1 - passed - mirror) * emitted + mirror * mirrored : emitted + mirrored);
  });
  return partial;
}

/** Product of the gray transmittances from step k on, for each k; the last one is 1. */
function transmittancesAfter({ steps }: MeasurementEquation, x: Float64Array): Float64Array {
  const after = new Float64Array(steps.length + 1).fill(1);
  for (let k = steps.length - 1; k >= 0; k--) after[k] = after[k + 1]! * x[steps[k]!.transmittance]!;
  return after;
}

/** The bands of a layer with a curve: what goes through, what it emits, what it mirrors. */
function spectralLayer(
  layer: Layer,
  transmittance: Scalar | Curve,
  behind: Band,
  name: string,
): { readonly through: Band; readonly emitted: Band; readonly mirrored: Band } {
  const passed = ratioFunction(transmittance, behind, `${name}.transmittance`);
  const mirrored = ratioFunction(layer.reflectance, behind, `${name}.reflectance`);
  const { breakpoints } = product(passed, mirrored);
  const rest = (wavelength: number): number => 1 - passed.at(wavelength) - mirrored.at(wavelength);
  // A step has two values at its breakpoint, so the sum is also looked at in the middle of each piece.
  const worst = breakpoints.reduce(
    (least, at, i) => Math.min(least, rest(at), rest((at + breakpoints[Math.max(i - 1, 0)]!) / 2)),
    1,
  );
  if (worst < -sumTolerance) {
    throw new MeasurementError('out-of-range', {
      path: `${name}.reflectance`,
      expected: 'transmittance + reflectance ≤ 1 at every wavelength',
      received: 1 - worst,
    });
  }
  return {
    through: isCurve(transmittance) ? behind.weightedBy(transmittance) : weightedInside(behind, passed),
    emitted: weightedInside(behind, { breakpoints, at: (wavelength) => Math.max(0, rest(wavelength)) }),
    mirrored: weightedInside(behind, mirrored),
  };
}

function weightedInside(band: Band, weight: SpectralFunction): Band {
  return reweighted(band, weight, band.descriptor);
}

function ratioFunction(value: Scalar | Curve, band: Band, name: string): SpectralFunction {
  if (isCurve(value)) return spectralFunction(value, name);
  if (typeof value === 'number') {
    const { from, to } = band.limits ?? { from: 0, to: Number.POSITIVE_INFINITY };
    return { breakpoints: [from, to], at: () => value };
  }
  throw new MeasurementError('unsupported', {
    path: name,
    expected: 'a number or a curve beside a curve, not a map',
    received: value,
  });
}

function radianceBehindCurve(path: string): MeasurementError {
  return new MeasurementError('unsupported', {
    path,
    expected: 'a temperature behind a layer whose transmittance is a curve',
    hint: 'A band radiance does not say how it is spread over wavelength.',
  });
}
