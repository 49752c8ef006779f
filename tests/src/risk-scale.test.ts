import { describe, expect, it } from 'vitest';
import { themes } from '../../tailwind.config.ts';

type Rgb = [number, number, number];

function linear(hex: string): Rgb {
  const channel = (at: number) => {
    const value = parseInt(hex.slice(at, at + 2), 16) / 255;
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
  };
  return [channel(1), channel(3), channel(5)];
}

/** Relative luminance and contrast as WCAG 2.2 defines them. */
const luminance = ([r, g, b]: Rgb) => 0.2126 * r + 0.7152 * g + 0.0722 * b;
function contrast(one: string, other: string): number {
  const [high, low] = [luminance(linear(one)), luminance(linear(other))].sort((a, b) => b - a);
  return (high + 0.05) / (low + 0.05);
}

/** CIE 1976 lightness, 0..100, of a luminance against white. */
const lightness = (y: number) => (y > 216 / 24389 ? 116 * Math.cbrt(y) - 16 : (24389 / 27) * y);

/**
 * Full severity, on linear RGB. Machado, Oliveira & Fernandes (2009), A physiologically-based model
 * for simulation of color vision deficiency, IEEE TVCG 15(6); coefficients from memory.
 */
const deficiencies: Record<string, [Rgb, Rgb, Rgb]> = {
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

function seenAs(hex: string, matrix: [Rgb, Rgb, Rgb]): Rgb {
  const [r, g, b] = linear(hex);
  const clamp = (value: number) => Math.min(1, Math.max(0, value));
  return matrix.map((row) => clamp(row[0] * r + row[1] * g + row[2] * b)) as Rgb;
}

const steps = ['r1', 'r2', 'r3', 'r4', 'r5'] as const;
const inks = ['r1i', 'r2i', 'r3i', 'r4i', 'r5i'] as const;

describe('contrast', () => {
  it('is measured as WCAG 2.2 states: black on white is 21, #777 on white 4.48', () => {
    expect(contrast('#000000', '#FFFFFF')).toBeCloseTo(21, 9);
    // The usual example of a grey that just fails 4.5 (W3C, Understanding SC 1.4.3).
    expect(contrast('#777777', '#FFFFFF')).toBeCloseTo(4.48, 2);
  });
});

describe.each(Object.entries(themes))('the %s theme', (_, theme) => {
  it.each(steps.map((step, index) => [step, inks[index]] as const))('prints %s in %s at 4.5 or more', (step, ink) => {
    expect(contrast(theme[step], theme[ink])).toBeGreaterThanOrEqual(4.5);
  });

  it('prints text on the page and in fields at 4.5 or more', () => {
    for (const ink of ['ink', 'ink2', 'ink3', 'act', 'warn'] as const) {
      expect(contrast(theme[ink], theme.water), `${ink} on water`).toBeGreaterThanOrEqual(4.5);
      expect(contrast(theme[ink], theme.paper), `${ink} on paper`).toBeGreaterThanOrEqual(4.5);
    }
    expect(contrast(theme['act-ink'], theme.act)).toBeGreaterThanOrEqual(4.5);
    for (const tone of ['1', '2', '3', '4', '5'] as const) {
      expect(contrast(theme[`q${tone}`], theme[`q${tone}i`]), `heat map ${tone}`).toBeGreaterThanOrEqual(4.5);
    }
    for (const sky of ['1', '2', '3', '4'] as const) {
      expect(contrast(theme[`sky${sky}`], theme[`sky${sky}i`]), `ribbon hour ${sky}`).toBeGreaterThanOrEqual(4.5);
    }
  });

  it('draws field edges, the staffed line, percentile edges and the first ember at 3 or more', () => {
    for (const line of ['edge', 'staff', 'g-line', 's3', 'act'] as const) {
      expect(contrast(theme[line], theme.water), line).toBeGreaterThanOrEqual(3);
    }
  });

  const views: [string, (hex: string) => number][] = [
    // What a grey print keeps of a colour is its luminance.
    ['full colour, and printed in grey', (hex) => luminance(linear(hex))],
    ...Object.entries(deficiencies).map(([name, matrix]): [string, (hex: string) => number] => [
      name,
      (hex) => luminance(seenAs(hex, matrix)),
    ]),
  ];
  it.each(views)('keeps the figures of the risk scale and of the heat map at 4.5 or more, in %s', (_name, view) => {
    const contrastSeen = (one: string, other: string) => {
      const [high, low] = [view(one), view(other)].sort((a, b) => b - a);
      return (high + 0.05) / (low + 0.05);
    };
    steps.forEach((step, index) => {
      expect(contrastSeen(theme[step], theme[inks[index]]), step).toBeGreaterThanOrEqual(4.5);
    });
    for (const tone of ['1', '2', '3', '4', '5'] as const) {
      expect(contrastSeen(theme[`q${tone}`], theme[`q${tone}i`]), `heat map ${tone}`).toBeGreaterThanOrEqual(4.5);
    }
  });
  it.each(views)('tells the tones of the heat map apart by lightness, in %s', (_name, view) => {
    const tones = (['q1', 'q2', 'q3', 'q4', 'q5'] as const).map((tone) => lightness(view(theme[tone])));
    const gaps = tones.slice(1).map((tone, index) => tone - tones[index]);
    expect(new Set(gaps.map(Math.sign)).size, tones.join(' ')).toBe(1);
  });
  it.each(views)('runs one way in lightness, neighbours at least 8 apart, in %s', (_name, view) => {
    const tones = steps.map((step) => lightness(view(theme[step])));
    const gaps = tones.slice(1).map((tone, index) => tone - tones[index]);
    expect(new Set(gaps.map(Math.sign)).size, tones.join(' ')).toBe(1);
    for (const gap of gaps) expect(Math.abs(gap), tones.join(' ')).toBeGreaterThanOrEqual(8);
  });
});
