// From the contract's units to the reader's and back, and how many digits a figure deserves.
// Depth is never shown finer than 0.01 mm (0.001 inch): the model's own inputs are not known better.

export type TemperatureUnit = 'degc' | 'degf';
export type LengthUnit = 'mm' | 'inch';

const mmPerInch = 25.4;  // exact by definition of the inch

export const fromMm = (mm: number, unit: LengthUnit): number => (unit === 'mm' ? mm : mm / mmPerInch);
export const toMm = (shown: number, unit: LengthUnit): number => (unit === 'mm' ? shown : shown * mmPerInch);
export const fromDegc = (degc: number, unit: TemperatureUnit): number => (unit === 'degc' ? degc : degc * 1.8 + 32);
export const toDegc = (shown: number, unit: TemperatureUnit): number => (unit === 'degc' ? shown : (shown - 32) / 1.8);

// A difference of temperatures.
export const fromKelvins = (k: number, unit: TemperatureUnit): number => (unit === 'degc' ? k : k * 1.8);
export const toKelvins = (shown: number, unit: TemperatureUnit): number => (unit === 'degc' ? shown : shown / 1.8);
export const differenceName = (unit: TemperatureUnit): string => (unit === 'degc' ? 'K' : '°F');

export const lengthName = (unit: LengthUnit): string => (unit === 'mm' ? 'mm' : 'in');
export const temperatureName = (unit: TemperatureUnit): string => (unit === 'degc' ? '°C' : '°F');

export const fixed = (value: number, digits: number): string => {
  const text = value.toFixed(digits);
  return Number(text) === 0 ? (0).toFixed(digits) : text;  // no "-0.00"
};

export const depthDigits = (unit: LengthUnit): number => (unit === 'mm' ? 2 : 3);
// The least depth that can be told apart on the screen: a shortfall is never rounded to nothing.
export const leastDepthMm = (unit: LengthUnit): number => (unit === 'mm' ? 0.01 : 0.001 * mmPerInch);
export const depthNumber = (mm: number | null, unit: LengthUnit): string =>
  (mm === null || !Number.isFinite(mm) ? '–' : fixed(fromMm(mm, unit), depthDigits(unit)));
export const depthText = (mm: number | null, unit: LengthUnit): string =>
  (mm === null ? '–' : `${depthNumber(mm, unit)} ${lengthName(unit)}`);
// Without the unit, for places beside a figure that carries it.
export const rangeText = (window: readonly [number, number], unit: LengthUnit): string =>
  `${depthNumber(window[0], unit)} – ${depthNumber(window[1], unit)}`;
export const windowText = (window: readonly [number, number], unit: LengthUnit): string =>
  `${rangeText(window, unit)} ${lengthName(unit)}`;

export const temperatureText = (degc: number | null, unit: TemperatureUnit): string =>
  (degc === null ? '–' : `${fixed(fromDegc(degc, unit), 0)} ${temperatureName(unit)}`);
export const carbonNumber = (wtPct: number | null): string => (wtPct === null ? '–' : fixed(wtPct, 2));
export const carbonText = (wtPct: number | null): string => (wtPct === null ? '–' : `${fixed(wtPct, 2)} % C`);
export const carbonWindowText = (window: readonly [number, number]): string =>
  `${fixed(window[0], 2)} – ${fixed(window[1], 2)} % C`;

// A channel's value in the channel's own unit, temperatures as this screen shows them; fine enough to tell two
// readings apart.
export function channelText(value: number, unit: string, shown: TemperatureUnit): string {
  const degc = unit === 'degC' ? value : unit === 'degF' ? toDegc(value, 'degf') : unit === 'K' ? value - 273.15 : null;
  if (degc !== null) return `${fixed(fromDegc(degc, shown), 1)} ${temperatureName(shown)}`;
  if (unit === 'wt_pct') return `${fixed(value, 3)} % C`;
  return `${plainNumber(value, 3)} ${unitName(unit)}`;
}
export const unitName = (unit: string): string => ({ degC: '°C', degF: '°F', wt_pct: '% C', vol_pct: '%', uV: 'µV' } as Record<string, string>)[unit] ?? unit;

// A sentence of the daemon's with its temperatures as this screen shows them: "60 degC" becomes "60 °C" or "140 °F".
export const withTemperatures = (text: string, shown: TemperatureUnit): string =>
  text.replace(/(-?\d+(?:\.\d+)?) degC\b/g, (_, value: string) => temperatureText(Number(value), shown));
// The same for depths: "0.87 mm", "0.95 to 1.25 mm". Only decimal fractions are depths here; "24 mm" is a part's size.
export const withDepths = (text: string, shown: LengthUnit): string => (shown === 'mm' ? text
  : text.replace(/(\d+\.\d+)( to | – )?(\d+\.\d+)? mm\b/g, (whole, first: string, between?: string, second?: string) =>
    (between && second ? `${depthNumber(Number(first), shown)}${between}${depthText(Number(second), shown)}` : between || second ? whole : depthText(Number(first), shown))));
export const withUnits = (text: string, { length, temperature }: { length: LengthUnit; temperature: TemperatureUnit }): string => withDepths(withTemperatures(text, temperature), length).replaceAll(' -> ', ' → ');
export const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

// What a person types: decimal comma or point, blanks around. null when it is no number.
export function numberFrom(text: string): number | null {
  const plain = text.trim().replace(',', '.').replace('−', '-');
  if (!/^[+-]?(\d+\.?\d*|\.\d+)$/.test(plain)) return null;
  return Number(plain);
}

// The shortest decimal of at most `digits` places: 930 stays "930", 0.9 stays "0.9".
export const plainNumber = (value: number, digits: number): string => String(Number(value.toFixed(digits)));
