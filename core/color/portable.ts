// Functions whose last bit differs between JavaScript engines, made of + - * / and Math.sqrt alone: IEEE 754 rounds these
// in one way everywhere. Each states its error in units in the last place (ulp), against the exact value.

/** x^(1/5) for x >= 0, within 2 ulp. Newton on y^5 = x. */
export function fifthRoot(x: number): number {
  if (x === 0 || x === Number.POSITIVE_INFINITY) return x;
  let scale = 1;
  let rest = x;
  while (rest < 1 / 32) {
    rest *= 32;
    scale *= 0.5;
  }
  while (rest >= 1) {
    rest /= 32;
    scale *= 2;
  }
  // The line is within 0.12 of the root on [1/32, 1); the error squares with each step, so six steps reach the last bit; one more settles it.
  let root = 0.6 + 0.42 * rest;
  for (let step = 0; step < 7; step++) root += (rest / (root * root * (root * root)) - root) / 5;
  return root * scale;
}

/** x^(1/3) for x >= 0, within 2 ulp. Newton on y^3 = x. */
export function cubeRoot(x: number): number {
  if (x === 0 || x === Number.POSITIVE_INFINITY) return x;
  let scale = 1;
  let rest = x;
  while (rest < 1 / 8) {
    rest *= 8;
    scale *= 0.5;
  }
  while (rest >= 1) {
    rest /= 8;
    scale *= 2;
  }
  // The line is within 0.07 of the root on [1/8, 1).
  let root = 0.5 + 0.52 * rest;
  for (let step = 0; step < 7; step++) root += (rest / (root * root) - root) / 3;
  return root * scale;
}

/** sin(pi x), within 2 ulp and exactly 0 at integers, +-1 at halves. Any finite x. */
export function sinPi(x: number): number {
  // Both reductions are exact: x modulo 2 by a whole multiple, then a difference of nearby numbers (Sterbenz).
  let turn = x - 2 * Math.floor(x / 2 + 0.5);
  const sign = turn < 0 ? -1 : 1;
  turn = Math.abs(turn);
  if (turn > 0.5) turn = 1 - turn;
  return sign * (turn <= 0.25 ? sineSeries(Math.PI * turn) : cosineSeries(Math.PI * (0.5 - turn)));
}

/** sin(pi x) / (pi x), 1 at 0 and exactly 0 at every other integer; within 4 ulp. */
export function sinc(x: number): number {
  return x === 0 ? 1 : sinPi(x) / (Math.PI * x);
}

/** e^x, within 2 ulp where the result is a normal number. x = k ln 2 + r with |r| <= ln(2) / 2. */
export function exponential(x: number): number {
  if (x > 710) return Number.POSITIVE_INFINITY;
  if (x < -746) return 0;
  const power = Math.floor(x / Math.LN2 + 0.5);
  const rest = x - power * LN2_HIGH - power * LN2_LOW;
  let sum = 1;
  for (let n = 14; n >= 1; n--) sum = 1 + (rest / n) * sum;
  let scaled = sum;
  for (let n = 0; n < power; n++) scaled *= 2;
  for (let n = 0; n > power; n--) scaled *= 0.5;
  return scaled;
}

/** ln x for x > 0 and finite, within 3 ulp or 2^-53, whichever is more. x = 2^k m with m in [sqrt(1/2), sqrt(2)), and
 *  ln m = 2 atanh(s) with s = (m - 1) / (m + 1), |s| < 0.172.  [AbramowitzStegun64, 4.1.27] */
export function logarithm(x: number): number {
  let power = 0;
  let rest = x;
  while (rest >= Math.SQRT2) {
    rest /= 2;
    power++;
  }
  while (rest < Math.SQRT1_2) {
    rest *= 2;
    power--;
  }
  const s = (rest - 1) / (rest + 1);
  const square = s * s;
  // The first term left out is below 0.172^24 / 25, 2e-20.
  let tail = 0;
  for (let n = 23; n >= 3; n -= 2) tail = square * (1 / n + tail);
  return power * LN2_HIGH + (2 * s * (1 + tail) + power * LN2_LOW);
}

/** x^p for x >= 0 and p > 0: e^(p ln x). Within (3 + |p ln x|) ulp or so. */
export function power(x: number, p: number): number {
  return x === 0 ? 0 : exponential(p * logarithm(x));
}

/** Modified Bessel function of the first kind, order 0: sum of ((x/2)^k / k!)^2. All terms are positive, so nothing
 *  cancels: within 1e-14 of the value for |x| <= 50.  [AbramowitzStegun64, 9.6.12] */
export function besselI0(x: number): number {
  const quarter = (x * x) / 4;
  let term = 1;
  let sum = 1;
  for (let k = 1; sum + term !== sum || k <= x; k++) {
    term *= quarter / (k * k);
    sum += term;
  }
  return sum;
}

// ln 2 in two parts: the high one has its last 21 bits zero, so that power * LN2_HIGH is exact for |power| < 2^21. Their
// sum is ln 2 = 0.693147180559945309417232121458176568 to 33 digits.
const LN2_HIGH = 0.6931471803691238;
const LN2_LOW = 1.9082149292705877e-10;

/** sin t for 0 <= t <= pi/4: the Taylor polynomial to t^17; the first term left out is below 1e-19. */
function sineSeries(t: number): number {
  const square = t * t;
  let tail = 0;
  for (let n = 16; n >= 2; n -= 2) tail = (square / (n * (n + 1))) * (1 - tail);
  return t - t * tail;
}

/** cos t for 0 <= t <= pi/4: to t^18. */
function cosineSeries(t: number): number {
  const square = t * t;
  let tail = 0;
  for (let n = 17; n >= 1; n -= 2) tail = (square / (n * (n + 1))) * (1 - tail);
  return 1 - tail;
}
