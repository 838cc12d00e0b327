/**
 * Cautions: what a careful colleague would say about a reading, as data. They never replace a value or an error.
 *
 * The limits are common practice of the trade, no source, unless said otherwise beside them.
 */
import { type Engine, type EngineAt, saturationOf, termsAt } from './model.js';
import { type AnyKelvin, toCelsius } from './units.js';

/** Every code a {@link Caution} can carry. docs/ERRORS.md has a line on each. */
export const cautionCodes = [
  'reflected-dominates',
  'low-emissivity',
  'saturated',
  'steep-view-angle',
  'window-reflected-place',
  'inter-reflection',
  'outside-proven-range',
  'recorded-rounded',
  'narrow-band',
  'low-contrast',
  'replicates-scatter',
  'above-one',
] as const;

/** A code of {@link cautionCodes}. */
export type CautionCode = (typeof cautionCodes)[number];

/** Something to know before a value is used. */
export interface Caution {
  readonly code: CautionCode;
  /** What is the case, with its size. */
  readonly message: string;
  /** What to do. */
  readonly remedy: string;
}

/** Below this emissivity the trade measures another way or coats the surface. Common practice, no source. */
const lowEmissivity = 0.5;
/** Beyond this angle the emissivity of non-metals falls. Common practice, no source. [°] */
const steepAngle = 60;
/** Size of a neglected inter-reflection that is worth a word. [K] */
const interReflectionLimit = 0.2;

/** Cautions that hold for the conditions, whatever the reading. */
export function conditionCautions({ conditions, recorded }: Engine): Caution[] {
  const cautions: Caution[] = [];
  const { emissivity, viewAngle, path = [], reflectedMeasuredAt, band } = conditions;
  const resolution = recorded?.conditions.resolution;
  if (typeof emissivity === 'number' && emissivity < lowEmissivity) {
    cautions.push({
      code: 'low-emissivity',
      message: `Emissivity ${emissivity} is below ${lowEmissivity}: small errors of it and of the surroundings become large.`,
      remedy: 'Measure on a coated or taped spot, in a cavity, or by contact.',
    });
  }
  if (viewAngle !== undefined && viewAngle > steepAngle) {
    cautions.push({
      code: 'steep-view-angle',
      message: `The view is ${viewAngle}° from the normal: emissivity falls beyond ${steepAngle}°.`,
      remedy: 'Look at the surface more squarely, or use an emissivity for this angle.',
    });
  }
  if (path.some((layer) => layer.kind === 'window') && reflectedMeasuredAt !== 'target') {
    cautions.push({
      code: 'window-reflected-place',
      message:
        reflectedMeasuredAt === 'instrument'
          ? 'The reflected apparent temperature was measured on the instrument side of a window.'
          : 'There is a window on the path, and nothing says where the reflected apparent temperature was measured.',
      remedy:
        'Behind a window it is the inside of the enclosure: measure it there and state reflectedMeasuredAt: "target".',
    });
  }
  if (band.limits && (band.limits.from < 2 || band.limits.to > 15)) {
    cautions.push({
      code: 'outside-proven-range',
      message: `The band ${band.limits.from}…${band.limits.to} µm is outside 2…15 µm, where the inversion is proven to 0.1 mK.`,
      remedy: 'Check a few values against an independent calculation.',
    });
  }
  if (resolution !== undefined) {
    cautions.push({
      code: 'recorded-rounded',
      message: `Recorded temperatures are rounded to steps of ${resolution} K.`,
      remedy:
        'Half a step is in the budget as a rectangular distribution; use unrounded data where there is some.',
    });
  }
  return cautions;
}

/** Cautions for one reading. */
export function readingCautions(at: EngineAt, reading: AnyKelvin, surface: AnyKelvin): Caution[] {
  const { engine } = at;
  const cautions = conditionCautions(engine);
  const reflected = termsAt(at, surface).find((term) => term.name === 'reflected surroundings');
  if (reflected && reflected.share > 0.5) {
    cautions.push({
      code: 'reflected-dominates',
      message: `${Math.round(100 * reflected.share)} % of the radiance is reflected from the surroundings.`,
      remedy:
        'Raise the emissivity (coating, tape), shield the surroundings, or measure their reflected temperature closely.',
    });
  }
  const ends = saturationOf(engine);
  if (ends && (reading <= ends.from || reading >= ends.to)) cautions.push(saturatedCaution('The reading is'));
  for (const layer of engine.conditions.path ?? []) {
    cautions.push(...(layer.inBand?.(engine.conditions.band, reading).cautions ?? []));
  }
  const celsius = toCelsius(surface);
  if (celsius < -40 || celsius > 2000) {
    cautions.push({
      code: 'outside-proven-range',
      message: `${celsius.toFixed(1)} °C is outside −40…2000 °C: the inversion is proven to 1 mK there, not to 0.1 mK.`,
      remedy: 'Nothing, where 1 mK is small against the uncertainty.',
    });
  }
  const interReflection = interReflectionSize(at, surface);
  if (interReflection > interReflectionLimit) {
    cautions.push({
      code: 'inter-reflection',
      message: `Radiance of the target mirrored back by the window could add up to ${interReflection.toFixed(1)} K; it is not corrected.`,
      remedy: 'Tilt the window against the target, or take the size into account.',
    });
  }
  return cautions;
}

/** The caution of a reading, or of pixels, at an end of the measuring range. */
export function saturatedCaution(subject: string): Caution {
  return {
    code: 'saturated',
    message: `${subject} at an end of the measuring range: the true value lies there or beyond.`,
    remedy: 'Choose another measuring range and measure again.',
  };
}

/**
 * First-order size of inter-reflection between the target and the first window, in kelvin: the window mirrors
 * (1 − ε)·ρ·(L_target − L_reflected) back, if it fills what the target mirrors. [METHOD.md eq. 17]
 */
function interReflectionSize(at: EngineAt, surface: AnyKelvin): number {
  const { conditions, equation } = at.engine;
  const first = (conditions.path ?? []).findIndex((layer) => layer.kind === 'window');
  if (first < 0 || !equation.surface.gray) return 0;
  const emissivity = at.actual.x[equation.surface.emissivity]!;
  const reflected = at.actual.x[equation.surface.reflected]!;
  const reflectance = at.actual.x[equation.steps[first]!.reflectance]!;
  const leaving = emissivity * equation.targetBand.exact.radiance(surface) + (1 - emissivity) * reflected;
  const extra = (1 - emissivity) * reflectance * Math.abs(leaving - reflected);
  return extra / (emissivity * equation.targetBand.exact.slope(surface));
}
