// A guilloche rosette drawn from a SHA-256 and from nothing else. Pure: no clock, no randomness, no DOM; the same 64 hex
// digits give the same strokes on every machine (coordinates are rounded to a tenth).
//
// What the digits decide
//   bytes  0-5     silhouette: number, depth and second harmonic of the outer lobes
//   bytes  6-13    outer woven band: waves, strands, amplitude, swell
//   bytes 14-21    inner woven band: the same, independent
//   bytes 22-28    heart: a rose of petals or a hypotrochoid of n loops
//   bytes 29-31    turns of the three layers against each other
//   all 64 digits  the edge: 64 rays, clockwise from the top, digit d drawn d/15 of full length. The edge alone spells
//                  the whole hash, so two different hashes never give the same large seal.
//
// Below 96 pixels a coarser cut is drawn: fewer strands, lines of a whole pixel, deeper lobes, no rays, so that it stays
// crisp and tells itself apart at 48. The drawing helps the eye; the hash decides.

export type SealStroke = { d: string; width: number };

const TAU = 2 * Math.PI;
const HASH = /^[0-9a-f]{64}$/i;

type Point = [number, number];
type Curve = (t: number) => Point;

/** Whether a text is the 64 hex digits that a seal can be drawn from. */
export function isHash(hex: string): boolean {
  return HASH.test(hex);
}

/** The eight characters printed under a seal, in two groups of four, for reading aloud. */
export function sealWord(hex: string): string {
  return `${hex.slice(0, 4)} ${hex.slice(4, 8)}`.toUpperCase();
}

/** The strokes of the seal, in a space from -101 to 101 both ways, for the size in pixels at which it will be shown. */
export function sealStrokes(hex: string, size = 160): SealStroke[] {
  if (!isHash(hex)) throw new TypeError("a seal is drawn from the 64 hex digits of a SHA-256");
  const digits = hex.toLowerCase();
  const byte = (i: number) => Number.parseInt(digits.slice(2 * i, 2 * i + 2), 16);
  const pick = (i: number, low: number, high: number) => low + (byte(i) % (high - low + 1));
  const unit = (i: number) => byte(i) / 255;
  const small = size < 96;
  const bold = size < 60 ? 1.25 : 1;
  const fine = size < 200 ? 0.78 : 0.6; // about 0.6 pixels at 160
  const strokes: SealStroke[] = [];
  const put = (d: string, width: number) => strokes.push({ d, width: small ? hundredths(width * bold) : width });

  const lobes = pick(0, 5, 13);
  const depth = (2.5 + 5.5 * unit(1)) * (small ? 1.5 : 1);
  const second = lobes < 8 ? pick(2, 2, 3) : 2;
  const secondDepth = (small ? 0 : lobes < 8 ? 2.4 : 1.3) * unit(3);
  const secondPhase = TAU * unit(4);
  const pinch = byte(5) % 3; // 0 round lobes, 1 cusps inward, 2 cusps outward
  const turnA = TAU * unit(29);
  const turnB = TAU * unit(30);
  const turnC = TAU * unit(31);
  const lobe = (t: number) => {
    const angle = lobes * (t + turnA);
    const shaped =
      pinch === 0
        ? Math.cos(angle)
        : pinch === 1
          ? 1 - 2 * Math.abs(Math.sin(angle / 2))
          : 2 * Math.abs(Math.cos(angle / 2)) - 1;
    return depth * shaped + secondDepth * Math.cos(second * angle + secondPhase);
  };
  const ring = small ? 83 : 76;

  // Woven bands: strands of one wave, shifted against each other, under a common swell.
  const band = (from: number, middle: number, half: number, follow: number, waves: number, turn: number) => {
    const strands = small ? 2 : 4 + (byte(from + 1) % 4);
    const amplitude = half * (0.62 + 0.38 * unit(from + 2));
    const swells = pick(from + 3, 2, 7);
    const swell = 0.12 + 0.38 * unit(from + 4);
    const ripple = 0.28 * unit(from + 5);
    const ripples = 2 + (byte(from + 6) % 2);
    const skew = TAU * unit(from + 7);
    const steps = Math.min(640, Math.max(120, waves * (small ? 12 : 14)));
    for (let strand = 0; strand < strands; strand++) {
      const shift = (TAU * strand) / strands;
      const curve: Curve = (t) => {
        const envelope = 1 - swell * (0.5 + 0.5 * Math.cos(swells * (t + turn)));
        const wave =
          Math.sin(waves * (t + turn) + shift) +
          ripple * Math.sin(ripples * waves * (t + turn) + shift * ripples + skew);
        return polar(middle + follow * lobe(t) + (amplitude * envelope * wave) / (1 + ripple), t);
      };
      put(closed(curve, steps), small ? 3.1 : fine);
    }
  };
  band(6, ring - (small ? 20 : 13), small ? 14 : 13, 1, small ? pick(6, 7, 13) : 2 * pick(6, 9, 19), turnA);
  const innerWaves = small ? pick(14, 4, 8) : 2 * pick(14, 6, 12) + (byte(15) & 1);
  if (small)
    put(
      closed((t) => polar(42 + 5 * Math.sin(innerWaves * (t + turnB)), t), 180),
      3.1,
    );
  else band(14, 42, 12.5, 0.35, innerWaves, turnB);

  // Contours that follow the silhouette, and rings round the heart.
  for (const out of small ? [0] : [0, 2.3, 4.6]) {
    put(
      closed((t) => polar(ring + out + lobe(t), t), small ? 240 : 300),
      small ? 4.6 : fine,
    );
  }
  if (!small)
    for (const out of [0, 2])
      put(
        closed((t) => polar(26 + out, t), 120),
        fine,
      );

  // Heart.
  const radius = small ? 30 : 24;
  const petals = pick(22, 5, 12);
  if (byte(23) % 2) {
    const loops = coprimeBelow(petals, 2 + (byte(24) % Math.max(1, Math.floor(petals / 2) - 1)));
    const ratio = loops / petals;
    const reach = 0.55 + 0.9 * unit(25);
    const copies = small ? 1 : 2 + (byte(26) % 2);
    for (let copy = 0; copy < copies; copy++) {
      const turn = turnC + (TAU * copy) / (copies * petals);
      const arm = 1 - ratio;
      const scale = radius / (arm + reach * ratio);
      const curve: Curve = (t) => [
        scale * (arm * Math.cos(t + turn) + reach * ratio * Math.cos((arm / ratio) * t - turn)),
        scale * (arm * Math.sin(t + turn) - reach * ratio * Math.sin((arm / ratio) * t - turn)),
      ];
      put(closed(curve, small ? 200 : 420, loops), small ? 3.4 : fine);
    }
  } else {
    const nested = small ? 1 : 3 + (byte(24) % 3);
    const floor = 0.18 + 0.4 * unit(25);
    for (let nest = 0; nest < nested; nest++) {
      const scale = 1 - nest * (0.16 + 0.05 * unit(26));
      const twist = turnC + nest * (unit(27) - 0.5) * 0.5;
      const curve: Curve = (t) =>
        polar(radius * scale * (floor + (1 - floor) * Math.abs(Math.cos((petals / 2) * (t + twist)))), t);
      put(closed(curve, small ? 160 : 300), small ? 4 : fine);
    }
    if (!small)
      put(
        closed((t) => polar(radius * floor * 0.55 * (1 + 0.35 * Math.cos(petals * (t + turnC))), t), 160),
        fine,
      );
  }

  // Edge: the 64 digits as rays. The coarse cut has its silhouette for an edge.
  if (!small) {
    put([...digits].map((digit, i) => ray(Number.parseInt(digit, 16), (TAU * i) / 64)).join(""), 1.4);
    put("M0-99.4A99.4 99.4 0 1 1-.01-99.4z", 0.8);
  }
  return strokes;
}

function ray(digit: number, t: number): string {
  const [x1, y1] = polar(99 - (1 + 9 * (digit / 15)), t);
  const [x2, y2] = polar(99, t);
  return `M${hundredths(x1)} ${hundredths(y1)}L${hundredths(x2)} ${hundredths(y2)}`;
}

/** A closed path in relative steps of whole tenths, so that steps add up without drift. */
function closed(curve: Curve, steps: number, turns = 1): string {
  let d = "";
  let lastX = 0;
  let lastY = 0;
  for (let i = 0; i < steps; i++) {
    const [exactX, exactY] = curve((i / steps) * TAU * turns);
    const x = Math.round(exactX * 10);
    const y = Math.round(exactY * 10);
    const down = tenths(y - lastY);
    d += (i ? "l" : "M") + tenths(x - lastX) + (down.startsWith("-") ? "" : " ") + down;
    lastX = x;
    lastY = y;
  }
  return `${d}z`;
}

function tenths(whole: number): string {
  return whole % 10 ? (whole / 10).toFixed(1).replace(/^(-?)0\./, "$1.") : String(whole / 10);
}

function hundredths(value: number): number {
  return Math.round(value * 100) / 100;
}

function polar(radius: number, t: number): Point {
  return [radius * Math.sin(t), -radius * Math.cos(t)];
}

function coprimeBelow(n: number, from: number): number {
  const divisor = (a: number, b: number): number => (b ? divisor(b, a % b) : a);
  let k = from;
  while (divisor(n, k) !== 1) k = k > 2 ? k - 1 : n - 1;
  return k;
}
