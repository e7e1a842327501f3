import { describe, expect, it } from 'vitest';
import { DARK, LIGHT, MEANINGS } from '../../../src/styles/tokens.ts';
import type { Palette } from '../../../src/styles/tokens.ts';

type Rgb = [number, number, number];

/** sRGB to linear light, IEC 61966-2-1. */
const linear = (c: number): number => (c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4);
const rgb = (hex: string): Rgb => [1, 3, 5].map((i) => linear(parseInt(hex.slice(i, i + 2), 16) / 255)) as Rgb;

/** Contrast ratio as WCAG 2.2 defines it, from relative luminance. */
function contrast(a: string, b: string): number {
  const [low, high] = [a, b]
    .map((hex) => rgb(hex))
    .map(([r, g, bl]) => 0.2126 * r + 0.7152 * g + 0.0722 * bl)
    .sort((x, y) => x - y);
  return (high + 0.05) / (low + 0.05);
}

/** Colour-vision deficiencies at full severity, on linear RGB: Machado, Oliveira, Fernandes 2009, severity 1.0 (second-hand). */
const EYES: Record<string, [Rgb, Rgb, Rgb]> = {
  'usual eyes': [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  protanopia: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  deuteranopia: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  tritanopia: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
};
const seen = (hex: string, eye: [Rgb, Rgb, Rgb]): Rgb => {
  const v = rgb(hex);
  return eye.map((row) => Math.min(1, Math.max(0, row[0] * v[0] + row[1] * v[1] + row[2] * v[2]))) as Rgb;
};

/** OKLab, Ottosson 2020 (from memory). */
function oklab([r, g, b]: Rgb): Rgb {
  const l = Math.cbrt(0.4122214708 * r + 0.5363325363 * g + 0.0514459929 * b);
  const m = Math.cbrt(0.2119034982 * r + 0.6806995451 * g + 0.1073969566 * b);
  const s = Math.cbrt(0.0883024619 * r + 0.2817188376 * g + 0.6299787005 * b);
  return [
    0.2104542553 * l + 0.793617785 * m - 0.0040720468 * s,
    1.9779984951 * l - 2.428592205 * m + 0.4505937099 * s,
    0.0259040371 * l + 0.7827717662 * m - 0.808675766 * s,
  ];
}
/** Distance in hundredths of OKLab; about 2 is just noticeable side by side (from memory). */
function distance(a: string, b: string, eye: [Rgb, Rgb, Rgb]): number {
  const [p, q] = [oklab(seen(a, eye)), oklab(seen(b, eye))];
  return 100 * Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]);
}

it('the contrast formula gives the 21 to 1 of black on white', () => {
  expect(contrast('#000000', '#ffffff')).toBeCloseTo(21, 6);
  // A pair just short of 4.5, published by WebAIM among others (from memory).
  expect(contrast('#777777', '#ffffff')).toBeCloseTo(4.48, 2);
});

describe.each([
  ['light', LIGHT],
  ['dark', DARK],
] as [string, Palette][])('%s paper', (_name, palette) => {
  it.each(['ink', 'pencil', 'action', 'person'] as const)('%s as text meets 4.5 to 1 on page and sheet', (name) => {
    expect(contrast(palette[name], palette.paper)).toBeGreaterThanOrEqual(4.5);
    expect(contrast(palette[name], palette.sheet)).toBeGreaterThanOrEqual(4.5);
  });
  it('words on the one action meet 4.5 to 1', () => {
    expect(contrast(palette.onAction, palette.action)).toBeGreaterThanOrEqual(4.5);
  });
  it.each([...MEANINGS, 'edge'] as const)('%s as a drawn thing meets 3 to 1 on the page', (name) => {
    expect(contrast(palette[name], palette.paper)).toBeGreaterThanOrEqual(3);
  });
  it('the edge of a field meets 3 to 1 on its sheet', () => {
    expect(contrast(palette.edge, palette.sheet)).toBeGreaterThanOrEqual(3);
  });
  it.each(Object.keys(EYES))('no two meanings come near each other for %s', (eye) => {
    for (const a of MEANINGS) {
      for (const b of MEANINGS) {
        if (a < b) expect(distance(palette[a], palette[b], EYES[eye]), `${a} and ${b}`).toBeGreaterThanOrEqual(11);
      }
    }
  });
});
