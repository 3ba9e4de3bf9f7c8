import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { isDetermined, reasonOrNull, type Figure, type Interval } from './determinable';
import { agreementFigures, figuresOfSessions, type Figures } from './figures';
import { sumSession, type PairGroup } from './sessions';
import { leaveOneOut, mergeMoments, mergeSums, sumPairs } from './sums';

const number = (figure: Figure): number => (isDetermined(figure) ? figure : NaN);
const group = (session: string, reference: number[], wearable: number[], participant?: string): PairGroup => ({
	session,
	participant,
	reference: Float64Array.from(reference),
	wearable: Float64Array.from(wearable)
});

/** Every figure worked out again the long way, from its definition, over plain arrays. */
function theLongWay(groups: PairGroup[]) {
	const x = groups.flatMap((g) => [...g.reference]);
	const y = groups.flatMap((g) => [...g.wearable]);
	const d = y.map((v, i) => v - x[i]);
	const n = d.length;
	const mean = (v: number[]) => v.reduce((a, b) => a + b, 0) / v.length;
	const covariance = (a: number[], b: number[]) => mean(a.map((v, i) => (v - mean(a)) * (b[i] - mean(b))));
	const share = (test: (i: number) => boolean) => d.filter((_, i) => test(i)).length / n;
	const sorted = d.map(Math.abs).sort((a, b) => a - b);
	const quantile = (p: number) => {
		const at = p * (n - 1);
		return sorted[Math.floor(at)] + (sorted[Math.ceil(at)] - sorted[Math.floor(at)]) * (at % 1);
	};
	return {
		bias: mean(d),
		sdNaive: Math.sqrt((covariance(d, d) * n) / (n - 1)),
		mae: mean(d.map(Math.abs)),
		mape: 100 * mean(d.map((v, i) => Math.abs(v) / x[i])),
		rmse: Math.sqrt(mean(d.map((v) => v * v))),
		pearsonR: covariance(x, y) / Math.sqrt(covariance(x, x) * covariance(y, y)),
		ccc: (2 * covariance(x, y)) / (covariance(x, x) + covariance(y, y) + (mean(x) - mean(y)) ** 2),
		within5bpm: share((i) => Math.abs(d[i]) <= 5),
		within5pct: share((i) => Math.abs(d[i]) * 20 <= x[i]),
		within10pct: share((i) => Math.abs(d[i]) * 10 <= x[i]),
		withinEc13: share((i) => Math.abs(d[i]) <= 5 || Math.abs(d[i]) * 10 <= x[i]),
		halfRateShare: share((i) => y[i] * 20 >= 9 * x[i] && y[i] * 20 <= 11 * x[i]),
		doubleRateShare: share((i) => y[i] * 10 >= 18 * x[i] && y[i] * 10 <= 22 * x[i]),
		medianAbs: quantile(0.5),
		p95Abs: quantile(0.95)
	};
}
type Plain = ReturnType<typeof theLongWay>;

const bpm = fc.integer({ min: 35, max: 210 });
const pairs = fc.array(
	fc.tuple(
		bpm,
		fc.oneof(
			bpm,
			fc.integer({ min: 35, max: 210 }).map((v) => v / 2)
		)
	),
	{ minLength: 1, maxLength: 40 }
);
const sessions = fc.array(pairs, { minLength: 1, maxLength: 8 }).map((list) =>
	list.map((p, i) =>
		group(
			`S${i}`,
			p.map((v) => v[0]),
			p.map((v) => v[1])
		)
	)
);
const numbersOf = (figures: Figures): [string, number | null][] => {
	const flat: [string, number | null][] = [];
	const walk = (path: string, value: unknown) => {
		if (typeof value === 'number') flat.push([path, value]);
		else if (value === null || (typeof value === 'object' && 'notDeterminable' in value)) flat.push([path, null]);
		else if (typeof value === 'object') for (const [key, inner] of Object.entries(value)) walk(`${path}.${key}`, inner);
	};
	walk('', figures);
	return flat;
};
const expectSame = (a: Figures, b: Figures, digits = 8) => {
	const other = new Map(numbersOf(b));
	for (const [path, value] of numbersOf(a)) {
		const match = other.get(path);
		if (value === null || !match)
			expect([path, match === null ? null : Math.abs(match ?? 0) < 1e-9], path).toEqual([
				path,
				value === null ? null : Math.abs(value) < 1e-9
			]);
		else expect(Math.abs(value - match) / Math.max(1, Math.abs(match)), path).toBeLessThan(10 ** -digits);
	}
};

describe('every figure is its definition', () => {
	it('the one-pass sums give what the long way gives', () => {
		fc.assert(
			fc.property(sessions, (groups) => {
				const figures = agreementFigures(groups);
				for (const [key, want] of Object.entries(theLongWay(groups)) as [keyof Plain, number][]) {
					if (Number.isFinite(want) && isDetermined(figures[key]))
						expect(Math.abs(number(figures[key]) - want), key).toBeLessThan(1e-8 * Math.max(1, Math.abs(want)));
				}
			})
		);
	});
	it('15 bpm off at 150 is within 10 %, and 5 bpm off within 5 bpm: edges count', () => {
		const figures = agreementFigures([group('S1', [150, 150, 150, 30], [165, 165.1, 145, 35])]);
		expect([figures.within10pct, figures.within5bpm, figures.withinEc13]).toEqual([0.5, 0.5, 0.75]);
	});
	it('a median over millions of readings that sit in one bin, or above all bins, is exact', () => {
		for (const offset of [0.01, 500]) {
			const d = Array.from({ length: 1001 }, (_, i) => offset + ((i * 7919) % 1001) * 1e-5);
			const figures = agreementFigures([group('S1', new Array(1001).fill(0), d)]);
			expect(number(figures.medianAbs)).toBeCloseTo(offset + 500e-5, 12);
			expect(number(figures.p95Abs)).toBeCloseTo(offset + 950e-5, 12);
		}
	});
});

describe('properties', () => {
	it('merging sessions’ sums equals summing all their pairs', () => {
		fc.assert(
			fc.property(sessions, (groups) => {
				const merged = mergeSums(groups.map((g) => sumPairs(g.reference, g.wearable)));
				const whole = sumPairs(
					Float64Array.from(groups.flatMap((g) => [...g.reference])),
					Float64Array.from(groups.flatMap((g) => [...g.wearable]))
				);
				for (const key of Object.keys(whole) as (keyof typeof whole)[]) {
					if (key === 'errorBins') expect(merged.errorBins).toEqual(whole.errorBins);
					else expect(Math.abs(merged[key] - whole[key]), key).toBeLessThan(1e-9 * Math.max(1, Math.abs(whole[key])));
				}
			})
		);
	});
	it('leaving one out equals merging the others', () => {
		fc.assert(
			fc.property(sessions, (groups) => {
				const sums = groups.map((g) => sumPairs(g.reference, g.wearable));
				leaveOneOut(sums).forEach((rest, i) => {
					const others = mergeMoments(sums.filter((_, j) => j !== i));
					expect(rest.n).toBe(others.n);
					expect(rest.squaresDifference).toBeCloseTo(others.squaresDifference, 5);
				});
			})
		);
	});
	it('the order of sessions and of rows does not matter', () => {
		fc.assert(
			fc.property(sessions, (groups) => {
				const turned = [...groups]
					.reverse()
					.map((g) => ({ ...g, reference: g.reference.toReversed(), wearable: g.wearable.toReversed() }));
				expectSame(agreementFigures(groups), agreementFigures(turned), 6);
			})
		);
	});
	it('a session given in parts is one session', () => {
		const whole = agreementFigures([group('S1', [100, 110, 120], [101, 108, 125]), group('S2', [90, 95], [92, 99])]);
		const parts = agreementFigures([
			group('S1', [100], [101]),
			group('S2', [90, 95], [92, 99]),
			group('S1', [110, 120], [108, 125])
		]);
		expectSame(whole, parts);
		expect(parts.sessions).toBe(2);
	});
	it('adding a constant to the wearable moves the bias and the limits by it and leaves every spread', () => {
		fc.assert(
			fc.property(sessions, fc.integer({ min: -30, max: 30 }), (groups, shift) => {
				const before = agreementFigures(groups);
				const after = agreementFigures(groups.map((g) => ({ ...g, wearable: g.wearable.map((v) => v + shift) })));
				expect(number(after.bias)).toBeCloseTo(number(before.bias) + shift, 9);
				for (const key of ['sd', 'sdNaive', 'pearsonR', 'varBetween', 'varWithin', 'designEffect'] as const) {
					expect(isDetermined(after[key])).toBe(isDetermined(before[key]));
					if (isDetermined(before[key])) expect(number(after[key])).toBeCloseTo(number(before[key]), 7);
				}
				for (const key of ['loa', 'biasCi95', 'loaUpperCi95'] as const) {
					const [a, b]: Interval[] = [before[key], after[key]];
					if (isDetermined(a) && isDetermined(b))
						for (const side of [0, 1]) expect(b[side]).toBeCloseTo(a[side] + shift, 6);
				}
			})
		);
	});
	it('in another unit every error scales and every share of the reference stays', () => {
		fc.assert(
			fc.property(sessions, fc.constantFrom(0.5, 2, 4), (groups, scale) => {
				const before = agreementFigures(groups);
				const after = agreementFigures(
					groups.map((g) => ({
						...g,
						reference: g.reference.map((v) => v * scale),
						wearable: g.wearable.map((v) => v * scale)
					}))
				);
				for (const key of ['bias', 'sd', 'mae', 'rmse', 'medianAbs', 'p95Abs'] as const)
					if (isDetermined(before[key])) expect(number(after[key])).toBeCloseTo(number(before[key]) * scale, 7);
				for (const key of ['mape', 'pearsonR', 'ccc', 'within10pct', 'halfRateShare', 'doubleRateShare'] as const)
					if (isDetermined(before[key])) expect(number(after[key])).toBeCloseTo(number(before[key]), 9);
			})
		);
	});
	it('every interval holds its figure, and every ordering stands', () => {
		fc.assert(
			fc.property(sessions, (groups) => {
				const f = agreementFigures(groups);
				const holds: [Figure, Interval][] = [
					[f.bias, f.biasCi95],
					[f.mae, f.maeCi95],
					[f.mape, f.mapeCi95],
					[f.ccc, f.cccCi95],
					[f.within5bpm, f.within5bpmCi95]
				];
				for (const [figure, interval] of holds) {
					if (!isDetermined(figure) || !isDetermined(interval)) continue;
					expect(interval[0]).toBeLessThanOrEqual(figure + 1e-9);
					expect(interval[1]).toBeGreaterThanOrEqual(figure - 1e-9);
				}
				expect(number(f.mae)).toBeLessThanOrEqual(number(f.rmse) + 1e-9);
				expect(number(f.medianAbs)).toBeLessThanOrEqual(number(f.p95Abs) + 1e-9);
			})
		);
	});
});

describe('what cannot be determined is said, not guessed', () => {
	const reason = (figure: Figure | Interval) => reasonOrNull(figure) ?? '';
	it('nothing at all', () => {
		const figures = agreementFigures([]);
		expect(figures.n).toBe(0);
		for (const key of ['bias', 'sd', 'mae', 'pearsonR', 'ccc', 'within5bpm', 'medianAbs'] as const)
			expect(isDetermined(figures[key]), key).toBe(false);
	});
	it('one session: the naive limits stand, the honest ones do not', () => {
		const figures = agreementFigures([group('S1', [100, 110, 120, 130], [101, 108, 125, 131])]);
		expect(isDetermined(figures.loaNaive)).toBe(true);
		expect(reason(figures.sd)).toContain('one session');
		expect(reason(figures.loa)).toContain('one session');
		expect(reason(figures.biasCi95)).toContain('at least two');
		expect(number(figures.varWithin)).toBeGreaterThan(0);
	});
	it('one pair: no spread, no correlation', () => {
		const figures = agreementFigures([group('S1', [100], [101])]);
		expect(number(figures.mae)).toBe(1);
		for (const key of ['sdNaive', 'pearsonR', 'ccc'] as const) expect(isDetermined(figures[key]), key).toBe(false);
	});
	it('a frozen wearable has no correlation but every error', () => {
		const figures = agreementFigures([group('S1', [100, 110], [105, 105]), group('S2', [90, 95], [105, 105])]);
		expect(reason(figures.pearsonR)).toContain('does not vary');
		expect(figures.ccc).toBe(0);
		expect(figures.mae).toBe(8.75);
	});
	it('a reference of 0 has no percentage', () => {
		expect(reason(agreementFigures([group('S1', [0, 100], [1, 101])]).mape)).toContain('are 0');
	});
	it('sessions that differ less than their seconds do: the between-part is 0 and flagged', () => {
		const figures = agreementFigures([group('S1', [100, 100], [90, 110]), group('S2', [100, 100], [91, 109])]);
		expect(figures.varBetween).toBe(0);
		expect(figures.betweenSetToZero).toBe(true);
		expect(number(figures.sd)).toBeCloseTo(Math.sqrt(number(figures.varWithin)), 12);
	});
	it('columns that do not match, or values that are no numbers, are refused', () => {
		expect(() => sumPairs(Float64Array.of(1), Float64Array.of())).toThrow(
			expect.objectContaining({ code: 'lengths-differ' })
		);
		expect(() => sumPairs(Float64Array.of(1, 2), Float64Array.of(1, NaN))).toThrow(
			expect.objectContaining({ code: 'not-finite' })
		);
		expect(() => sumPairs(Float64Array.of(1, Infinity), Float64Array.of(1, 2))).toThrow(
			expect.objectContaining({ code: 'not-finite' })
		);
	});
});

describe('coverage and people', () => {
	it('coverage is over all sessions’ sound time, also of a session in which the wearable said nothing', () => {
		const a = { ...group('S1', [100], [100]), soundReferenceS: 100, pairedS: 90 };
		const silent = { ...group('S2', [], []), soundReferenceS: 100, pairedS: 0 };
		expect(agreementFigures([a, silent]).coverage).toBe(0.45);
		expect(agreementFigures([a, silent]).sessions).toBe(1);
	});
	it('is not determinable when one session does not say', () => {
		expect(isDetermined(agreementFigures([group('S1', [100], [100])]).coverage)).toBe(false);
	});
	it('the same session code under two people is two sessions', () => {
		const figures = agreementFigures([group('1', [100, 101], [101, 101], 'P1'), group('1', [90, 91], [91, 92], 'P2')]);
		expect([figures.sessions, figures.participants]).toEqual([2, 2]);
	});
	it('by person, intervals rest on people and are wider when people differ', () => {
		const groups = [0, 1, 2].flatMap((person) =>
			[0, 1, 2, 3].map((s) =>
				group(
					`S${s}`,
					Array.from({ length: 20 }, (_, i) => 100 + i),
					Array.from({ length: 20 }, (_, i) => 100 + i + person * 4 + ((i + s) % 3)),
					`P${person}`
				)
			)
		);
		const width = (interval: Interval) => (isDetermined(interval) ? interval[1] - interval[0] : NaN);
		const bySession = agreementFigures(groups);
		const byPerson = agreementFigures(groups, { cluster: 'participant' });
		expect(width(byPerson.biasCi95)).toBeGreaterThan(1.5 * width(bySession.biasCi95));
		expect(byPerson.sd).toEqual(bySession.sd);
	});
	it('one recomputed session beside kept sums gives what recomputing everything gives', () => {
		const groups = [
			group('S1', [100, 110, 120], [101, 108, 125]),
			group('S2', [90, 95], [92, 99]),
			group('S3', [70, 75], [72, 70])
		];
		const kept = groups.map(sumSession);
		const changed = group('S2', [90], [92]);
		kept[1] = sumSession(changed);
		const { medianAbs: _m, p95Abs: _p, ...refreshed } = figuresOfSessions(kept);
		expect(agreementFigures([groups[0], changed, groups[2]])).toMatchObject(refreshed);
	});
});
