/**
 * The ramps of the maps. Lightness is strictly monotone on each arm and each ramp was checked with
 * simulated protan, deutan and tritan vision; weak always sinks into the sheet.
 */
const diverging = {
  light:
    '412766 573A81 6E509A 8567B1 9C7FC5 B399D8 CAB4E8 E0D1F6 F7F3E8 E9D7B4 D8BC8C C7A166 B48744 A06D22 8A5600 6F4200 552F00',
  dark: 'DDC4FF C5A9EF AC91D8 937BBF 7A66A3 625387 4B4169 35304B 1C222A 453117 60441A 7B5820 956E2A AF863A C79E50 DEB96B F4D38B',
};
const sequential = {
  light: 'F2F6E7 C9DFBF 99C9A3 66B292 359887 0B7C7A 0D5F67 1C424D 1E282D',
  dark: '151F27 103947 00565E 00736F 2D9079 65A982 9AC094 C9D6B4 EEEEE1',
};

/** Red, green and blue, 0 to 255. */
export type Rgb = readonly [number, number, number];

const parse = (ramp: string): Rgb[] =>
  ramp.split(' ').map(hex => {
    const value = parseInt(hex, 16);
    return [value >> 16, (value >> 8) & 255, value & 255];
  });

export const ramps = {
  diverging: {light: parse(diverging.light), dark: parse(diverging.dark)},
  sequential: {light: parse(sequential.light), dark: parse(sequential.dark)},
} as const;

export const css = ([red, green, blue]: Rgb): string =>
  `rgb(${Math.round(red)} ${Math.round(green)} ${Math.round(blue)})`;

export const mix = (a: Rgb, b: Rgb, share: number): Rgb => [
  a[0] + (b[0] - a[0]) * share,
  a[1] + (b[1] - a[1]) * share,
  a[2] + (b[2] - a[2]) * share,
];

/** The colour at `position`, 0 to 1, of a ramp; the stops are near enough to mix in sRGB. */
export function at(ramp: readonly Rgb[], position: number): Rgb {
  const place = Math.min(1, Math.max(0, position)) * (ramp.length - 1);
  const before = Math.min(ramp.length - 2, Math.floor(place));
  return mix(ramp[before], ramp[before + 1], place - before);
}

const linear = (channel: number): number => {
  const c = channel / 255;
  return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
};

/** Relative luminance of WCAG 2. */
export const luminance = ([red, green, blue]: Rgb): number =>
  0.2126 * linear(red) + 0.7152 * linear(green) + 0.0722 * linear(blue);

export const contrast = (a: Rgb, b: Rgb): number => {
  const [low, high] = [luminance(a), luminance(b)].sort((p, q) => p - q);
  return (high + 0.05) / (low + 0.05);
};
