/**
 * Normal, Student t, chi-squared, F and non-central t: distribution functions and quantiles in double precision.
 *
 * Built on the incomplete gamma and beta functions (series and continued fractions, Press WH et al., Numerical
 * Recipes, 3rd ed. 2007, chapter 6), their front factors after Loader's saddle-point form (Fast and Accurate
 * Computation of Binomial Probabilities, 2000) so that many degrees of freedom lose
 * no digits. Quantiles invert the distribution function.
 * Checked against published quantiles in `checks/`.
 */

/** Stirling's correction ln Γ(n + 1) − (n + ½) ln n + n − ½ ln 2π, n > 0: asymptotic series, small n lifted above 15. */
function stirlingCorrection(n: number): number {
	let lift = 0;
	let x = n;
	if (x < 15) {
		let product = 1;
		while (x < 15) product *= ++x;
		// ln Γ(n + 1) = ln Γ(x + 1) − ln product
		lift = (x + 0.5) * Math.log(x) - x - Math.log(product) - ((n + 0.5) * Math.log(n) - n);
	}
	const s = 1 / (x * x);
	return (
		lift +
		(1 / 12 - (1 / 360 - (1 / 1260 - (1 / 1680 - (1 / 1188 - (691 / 360360 - s / 156) * s) * s) * s) * s) * s) / x
	);
}

const HALF_LOG_TWO_PI = 0.5 * Math.log(2 * Math.PI);

/** Natural logarithm of the gamma function, x > 0. */
export function logGamma(x: number): number {
	return stirlingCorrection(x) + (x + 0.5) * Math.log(x) - x + HALF_LOG_TWO_PI - Math.log(x);
}

/** x ln(x / m) + m − x without cancellation near x = m (the deviance term of Loader C, 2000). */
function devianceTerm(x: number, m: number): number {
	if (Math.abs(x - m) >= 0.1 * (x + m)) return x * Math.log(x / m) + m - x;
	const v = (x - m) / (x + m);
	let sum = (x - m) * v;
	let term = 2 * x * v;
	for (let j = 1; j < 1000; j++) {
		term *= v * v;
		const next = sum + term / (2 * j + 1);
		if (next === sum) break;
		sum = next;
	}
	return sum;
}

const SMALLEST = 1e-300;
const PRECISION = 1e-16;
/** Enough for a million degrees of freedom and more: the expansions converge within a few √a terms. */
const MOST_TERMS = 2_000_000;

/**
 * Regularised lower incomplete gamma function P(a, x) and its complement, both without cancellation.
 * @param a shape, > 0
 * @param x ≥ 0
 */
function gammaTails(a: number, x: number): { lower: number; upper: number } {
	if (x <= 0) return { lower: 0, upper: 1 };
	const front = Math.exp(-stirlingCorrection(a) - devianceTerm(a, x) - HALF_LOG_TWO_PI) * Math.sqrt(a);
	if (x < a + 1) {
		let term = 1 / a;
		let sum = term;
		for (let n = 1; n < MOST_TERMS && Math.abs(term) > Math.abs(sum) * PRECISION; n++) {
			term *= x / (a + n);
			sum += term;
		}
		const lower = sum * front;
		return { lower, upper: 1 - lower };
	}
	let b = x + 1 - a;
	let c = 1 / SMALLEST;
	let d = 1 / b;
	let h = d;
	for (let n = 1; n < MOST_TERMS; n++) {
		const an = -n * (n - a);
		b += 2;
		d = an * d + b;
		if (Math.abs(d) < SMALLEST) d = SMALLEST;
		c = b + an / c;
		if (Math.abs(c) < SMALLEST) c = SMALLEST;
		d = 1 / d;
		const step = d * c;
		h *= step;
		if (Math.abs(step - 1) < PRECISION * 4) break;
	}
	const upper = h * front;
	return { lower: 1 - upper, upper };
}

function betaFraction(a: number, b: number, x: number): number {
	let c = 1;
	let d = 1 - ((a + b) * x) / (a + 1);
	if (Math.abs(d) < SMALLEST) d = SMALLEST;
	d = 1 / d;
	let h = d;
	for (let m = 1; m < MOST_TERMS; m++) {
		let numerator = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
		d = 1 + numerator * d;
		if (Math.abs(d) < SMALLEST) d = SMALLEST;
		c = 1 + numerator / c;
		if (Math.abs(c) < SMALLEST) c = SMALLEST;
		d = 1 / d;
		h *= d * c;
		numerator = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
		d = 1 + numerator * d;
		if (Math.abs(d) < SMALLEST) d = SMALLEST;
		c = 1 + numerator / c;
		if (Math.abs(c) < SMALLEST) c = SMALLEST;
		d = 1 / d;
		const step = d * c;
		h *= step;
		if (Math.abs(step - 1) < PRECISION * 4) break;
	}
	return h;
}

/** Regularised incomplete beta function I_x(a, b) and its complement; `y` = 1 − x, given apart to keep its digits. */
function betaTails(a: number, b: number, x: number, y: number): { lower: number; upper: number } {
	if (x <= 0) return { lower: 0, upper: 1 };
	if (y <= 0) return { lower: 1, upper: 0 };
	const n = a + b;
	const front =
		Math.exp(
			stirlingCorrection(n) -
				stirlingCorrection(a) -
				stirlingCorrection(b) -
				devianceTerm(a, n * x) -
				devianceTerm(b, n * y) -
				HALF_LOG_TWO_PI
		) * Math.sqrt((a * b) / n);
	if (x < (a + 1) / (a + b + 2)) {
		const lower = (front * betaFraction(a, b, x)) / a;
		return { lower, upper: 1 - lower };
	}
	const upper = (front * betaFraction(b, a, y)) / b;
	return { lower: 1 - upper, upper };
}

/** P(Z ≤ z), standard normal. */
export function normalCdf(z: number): number {
	if (Number.isNaN(z)) return NaN;
	const { upper } = gammaTails(0.5, (z * z) / 2);
	return z > 0 ? 1 - upper / 2 : upper / 2;
}

/** z with P(Z ≤ z) = p, 0 < p < 1. Exact symmetry: the quantile of 1 − p is its negative. */
export function normalQuantile(p: number): number {
	if (p === 0.5) return 0;
	const tail = Math.min(p, 1 - p);
	const z = invert((x) => gammaTails(0.5, (x * x) / 2).upper / 2 - tail, 0, 40);
	return p > 0.5 ? z : -z;
}

/** P(T ≤ t), Student's t with `df` > 0 degrees of freedom. */
export function studentCdf(t: number, df: number): number {
	const tail = studentTail(Math.abs(t), df);
	return t > 0 ? 1 - tail : tail;
}

function studentTail(t: number, df: number): number {
	const whole = df + t * t;
	return betaTails(df / 2, 0.5, df / whole, (t * t) / whole).lower / 2;
}

/** t with P(T ≤ t) = p, 0 < p < 1. */
export function studentQuantile(p: number, df: number): number {
	if (!Number.isFinite(df)) return normalQuantile(p);
	if (p === 0.5) return 0;
	const tail = Math.min(p, 1 - p);
	const t = invert((x) => studentTail(x, df) - tail, 0, Infinity);
	return p > 0.5 ? t : -t;
}

/** P(X ≤ x), chi-squared with `df` > 0. */
export function chiSquaredCdf(x: number, df: number): number {
	return gammaTails(df / 2, x / 2).lower;
}

/** x with P(X ≤ x) = p, 0 < p < 1. */
export function chiSquaredQuantile(p: number, df: number): number {
	return invert(
		p < 0.5 ? (x) => p - gammaTails(df / 2, x / 2).lower : (x) => gammaTails(df / 2, x / 2).upper - (1 - p),
		0,
		Infinity
	);
}

/** P(F ≤ f) with `df1`, `df2` > 0. */
export function fisherCdf(f: number, df1: number, df2: number): number {
	const whole = df1 * f + df2;
	return betaTails(df1 / 2, df2 / 2, (df1 * f) / whole, df2 / whole).lower;
}

/** f with P(F ≤ f) = p, 0 < p < 1. */
export function fisherQuantile(p: number, df1: number, df2: number): number {
	const tails = (f: number) => betaTails(df1 / 2, df2 / 2, (df1 * f) / (df1 * f + df2), df2 / (df1 * f + df2));
	return invert(p < 0.5 ? (f) => p - tails(f).lower : (f) => tails(f).upper - (1 - p), 0, Infinity);
}

/**
 * P(T ≤ t), non-central t with `df` > 0 and non-centrality `delta`: the mean of Φ(t·s − delta) over
 * s = √(χ²/df), by the trapezoid rule on log s, where the integrand dies off smoothly on both sides.
 */
export function noncentralStudentCdf(t: number, df: number, delta: number): number {
	const logFront = Math.log(2) + (df / 2) * Math.log(df / 2) - logGamma(df / 2);
	// Where the weight of s is below 1e-17 of its peak, on either side.
	const from = -Math.max(14 / Math.sqrt(2 * df), 42 / df);
	const to = Math.min(14 / Math.sqrt(2 * df), 0.5 * Math.log(1 + 100 / df) + 0.1);
	const steps = 400;
	const width = (to - from) / steps;
	let sum = 0;
	for (let i = 0; i <= steps; i++) {
		const u = from + i * width;
		const s = Math.exp(u);
		const logWeight = logFront + df * u - (df * s * s) / 2;
		if (logWeight > -745) sum += Math.exp(logWeight) * normalCdf(t * s - delta) * (i === 0 || i === steps ? 0.5 : 1);
	}
	return Math.min(1, sum * width);
}

/** t with P(T ≤ t) = p, non-central t. */
export function noncentralStudentQuantile(p: number, df: number, delta: number): number {
	// Start from a generous bracket around the normal approximation and let the inversion close it.
	const centre = delta;
	let reach = 1 + Math.abs(delta);
	while (noncentralStudentCdf(centre - reach, df, delta) > p) reach *= 2;
	while (noncentralStudentCdf(centre + reach, df, delta) < p) reach *= 2;
	return invert((t) => p - noncentralStudentCdf(t, df, delta), centre - reach, centre + reach);
}

/** Root of a decreasing function between `low` and `high` (may be infinite), to the last digits that doubles allow. */
function invert(f: (x: number) => number, low: number, high: number): number {
	let a = low;
	let b = Number.isFinite(high) ? high : Math.max(1, 2 * Math.abs(low));
	if (!Number.isFinite(high)) while (f(b) > 0 && b < 1e300) [a, b] = [b, b * 2];
	let fa = f(a);
	let fb = f(b);
	// Illinois variant of the false position, with a bisection whenever it does not shrink the bracket by half.
	for (let i = 0; i < 300; i++) {
		const width = b - a;
		if (Math.abs(width) <= 2e-15 * Math.max(Math.abs(a), Math.abs(b)) || width === 0) break;
		let x = Number.isFinite(fa) && Number.isFinite(fb) && fa !== fb ? (a * fb - b * fa) / (fb - fa) : (a + b) / 2;
		if (!(x > a && x < b) || i % 4 === 3) x = (a + b) / 2;
		const fx = f(x);
		if (fx === 0) return x;
		if (fx > 0) {
			a = x;
			fa = fx;
			fb /= 2;
		} else {
			b = x;
			fb = fx;
			fa /= 2;
		}
	}
	return (a + b) / 2;
}
