/** Conditions with one input changed by a little, whichever it is: for numerical derivatives. */
import { type Conditions, type Curve, type Layer, layer, type RecordedConditions } from '../../src/index.js';

type Mutable<T> = { -readonly [Key in keyof T]: T[Key] };
type Given = Pick<Conditions, 'emissivity'> & Partial<Conditions>;

const isCurve = (value: unknown): value is Curve =>
  typeof value === 'object' && value !== null && 'value' in value;

/** A number, or every value of a curve, raised by the same amount. */
function raised<T>(value: T, by: number): T {
  if (isCurve(value)) return { ...value, value: value.value.map((y) => y + by) };
  return ((value as number) + by) as T;
}

function raisedLayer(source: Layer, key: string, by: number): Layer {
  const inputs: Record<string, unknown> = { transmittance: source.transmittanceBehind([]) };
  if (source.reflectance !== 0) inputs.reflectance = source.reflectance;
  for (const name of ['temperature', 'mirroredTemperature', 'pathRadiance'] as const) {
    if (source[name] !== undefined) inputs[name] = source[name];
  }
  inputs[key] = raised(inputs[key], by);
  return layer(inputs as unknown as Parameters<typeof layer>[0]);
}

/** The same conditions with the input of this name raised by `by`. */
export function shifted<T extends Given | RecordedConditions>(conditions: T, name: string, by: number): T {
  const changed = { ...conditions } as Mutable<Conditions>;
  const inPath = /^path\[(\d+)\]\.(\w+)$/.exec(name);
  if (inPath) {
    changed.path = conditions.path!.map((own, k) =>
      k === Number(inPath[1]) ? raisedLayer(own, inPath[2]!, by) : own,
    );
  } else if (name.startsWith('surface.')) {
    const key = name.slice(8) as keyof NonNullable<Conditions['surface']>;
    const { surface } = changed;
    changed.surface = { ...surface!, [key]: raised(surface![key], by) };
  } else {
    const key = name as 'emissivity' | 'reflectedApparentTemperature' | 'reflectedRadiance';
    Object.assign(changed, { [key]: raised(changed[key], by) });
  }
  return changed as unknown as T;
}

/** Derivative of a function at 0 by differences of fourth order. */
export function derivative(of: (step: number) => number, step: number): number {
  return (8 * (of(step) - of(-step)) - (of(2 * step) - of(-2 * step))) / (12 * step);
}

/** Whether an input is a temperature, in kelvin. */
export const isTemperature = (name: string): boolean => /temperature|apparent$|^recorded$/i.test(name);
