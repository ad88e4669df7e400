/**
 * The true hue of a wavelength, as far as a screen can show it.
 *
 * CIE 1931 2 degree colour matching by the multi-lobe fit of Wyman, Sloan & Shirley, "Simple Analytic Approximations to
 * the CIE XYZ Color Matching Functions", Journal of Computer Graphics Techniques 2(2), 2013; linear sRGB by IEC
 * 61966-2-1 (D65). The fit is held within 405-650 nm; a fade stands for the eye's own at both ends; luminance is kept
 * within what the ground can bear. Light nobody sees has a colour of its own and is drawn broken.
 */
import type { ThemeName } from "../shared/theme.ts";

/** Ends of what is seen, nm: beyond them light is drawn broken. */
export const SEEN_FROM_NM = 380;
export const SEEN_TO_NM = 750;

export const isUnseen = (wavelengthNm: number): boolean => wavelengthNm < SEEN_FROM_NM || wavelengthNm > SEEN_TO_NM;

/** Bounds of relative luminance per ground: `--hue-least`, `--hue-most` of the tokens. */
const LUMINANCE: Record<"paper" | "ink", { least: number; most: number }> = {
  paper: { least: 0, most: 0.235 },
  ink: { least: 0.17, most: 0.55 },
};

function lobe(wavelengthNm: number, centreNm: number, below: number, above: number): number {
  const t = (wavelengthNm - centreNm) * (wavelengthNm < centreNm ? below : above);
  return Math.exp((-t * t) / 2);
}

function tristimulus(nm: number): [number, number, number] {
  return [
    0.362 * lobe(nm, 442.0, 0.0624, 0.0374) +
      1.056 * lobe(nm, 599.8, 0.0264, 0.0323) -
      0.065 * lobe(nm, 501.1, 0.049, 0.0382),
    0.821 * lobe(nm, 568.8, 0.0213, 0.0247) + 0.286 * lobe(nm, 530.9, 0.0613, 0.0322),
    1.217 * lobe(nm, 437.0, 0.0845, 0.0278) + 0.681 * lobe(nm, 459.0, 0.0385, 0.0725),
  ];
}

/** Linear: 1 between 430 and 640 nm, 0.55 at 380, 0.38 at 750. */
function fade(nm: number): number {
  if (nm < 430) return 0.55 + (0.45 * (nm - 380)) / 50;
  if (nm > 640) return 1 - (0.62 * (nm - 640)) / 110;
  return 1;
}

const luminance = ([r, g, b]: readonly [number, number, number]) => 0.2126 * r + 0.7152 * g + 0.0722 * b;

const encode = (linear: number): string => {
  const value = linear <= 0.0031308 ? 12.92 * linear : 1.055 * linear ** (1 / 2.4) - 0.055;
  return Math.round(Math.min(Math.max(value, 0), 1) * 255)
    .toString(16)
    .padStart(2, "0")
    .toUpperCase();
};

/**
 * Colour of a line of light on a theme's ground.
 *
 * @param wavelengthNm air or vacuum, nm; the difference is nothing to a hue
 * @returns `#RRGGBB`, or `var(--…)` of a token for light nobody sees and in the dark room, where every line is ink
 */
export function wavelengthHue(wavelengthNm: number, theme: ThemeName): string {
  if (theme !== "paper" && theme !== "ink") return "var(--ink)";
  if (wavelengthNm < SEEN_FROM_NM) return "var(--unseen-violet)";
  if (wavelengthNm > SEEN_TO_NM) return "var(--unseen-red)";
  const [x, y, z] = tristimulus(Math.min(Math.max(wavelengthNm, 405), 650));
  const raw = [
    3.2404542 * x - 1.5371385 * y - 0.4985314 * z,
    -0.969266 * x + 1.8760108 * y + 0.041556 * z,
    0.0556434 * x - 0.2040259 * y + 1.0572252 * z,
  ].map((v) => Math.max(v, 0));
  const largest = Math.max(...raw);
  const strength = fade(wavelengthNm) / largest;
  let rgb: [number, number, number] = [(raw[0] ?? 0) * strength, (raw[1] ?? 0) * strength, (raw[2] ?? 0) * strength];
  const { least, most } = LUMINANCE[theme];
  const bright = luminance(rgb);
  if (bright > most) rgb = rgb.map((v) => (v * most) / bright) as typeof rgb;
  else if (bright < least) {
    const white = (least - bright) / (1 - bright);
    rgb = rgb.map((v) => v + white * (1 - v)) as typeof rgb;
  }
  return `#${rgb.map(encode).join("")}`;
}
