import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Trace } from '../formats/recording';
import { coverageOf, kindsInMask, pairsOf } from './pair-table';
import { pairTraces, type PairingInput } from './pairing';
import { DEFAULT_PLAN, validatePlan } from './plan';
import type { PairingTag } from './tag';
import { DEFAULT_TAG_KINDS } from './tag-kinds';

const trace = (tS: number[], value: number[]): Trace => ({
	kind: 'heartRate',
	tS: Float64Array.from(tS),
	value: Float64Array.from(value)
});
const seconds = (n: number, of: (i: number) => number = (i) => 100 + i, startS = 1000): Trace =>
	trace(
		Array.from({ length: n }, (_, i) => startS + i),
		Array.from({ length: n }, (_, i) => of(i))
	);
const tag = (
	kind: string,
	startS: number,
	endS: number,
	cleanedOverride: PairingTag['cleanedOverride'] = null
): PairingTag => ({ kind, startS, endS, cleanedOverride });
const pair = (input: Partial<PairingInput> & Pick<PairingInput, 'reference' | 'wearable'>) =>
	pairTraces({
		offsetS: 0,
		driftPpm: 0,
		referenceTags: [],
		wearableTags: [],
		plan: DEFAULT_PLAN,
		kinds: DEFAULT_TAG_KINDS,
		...input
	});

describe('pairs on the clock', () => {
	it('would pair the wrong moments if the offset were not added to the wearable', () => {
		const table = pair({ reference: seconds(10), wearable: seconds(10, (i) => 100 + i, 997), offsetS: 3 });
		expect([...table.wearable]).toEqual([...table.reference]);
		expect(table.n).toBe(10);
		expect([...table.tS.slice(0, 2)]).toEqual([1000, 1001]);
	});
	it('would shift by a fraction wrongly if interpolation were not on the reference clock', () => {
		const table = pair({ reference: seconds(5), wearable: seconds(5), offsetS: 0.25 });
		// At 1001 the wearable stands between its readings of 1000 (at 1000.25) and 1001 (at 1001.25).
		expect([...table.tS]).toEqual([1001, 1002, 1003, 1004]);
		expect([...table.wearable]).toEqual([100.75, 101.75, 102.75, 103.75]);
	});
	it('would drift away over a long session if the rate were not applied from the first reading', () => {
		const table = pair({
			reference: seconds(2001),
			wearable: trace([1000, 1999], [100, 200]),
			driftPpm: 1e6 / 999,
			plan: { ...DEFAULT_PLAN, pairing: { method: 'nearest', toleranceS: 0.01 } }
		});
		expect([...table.tS]).toEqual([1000, 2000]);
	});
	it('counts drift from the recording when its heart rate starts later', () => {
		const table = pair({
			reference: seconds(20),
			wearable: trace([1010], [110]),
			driftPpm: 1e5,
			wearableFirstS: 1000,
			plan: { ...DEFAULT_PLAN, pairing: { method: 'nearest', toleranceS: 0 } }
		});
		expect([...table.tS]).toEqual([1011]);
	});
	it('bridges a gap of at most five seconds and nothing longer, and never goes past the ends', () => {
		const reference = seconds(30);
		const table = pair({ reference, wearable: trace([1002, 1007, 1013, 1014], [102, 107, 113, 114]) });
		expect([...table.tS]).toEqual([1002, 1003, 1004, 1005, 1006, 1007, 1013, 1014]);
		expect([...table.wearable]).toEqual([...table.reference]);
	});
	it('finds a reading whose stamp is off by float noise at epoch size', () => {
		const start = 1_700_000_000;
		const table = pair({
			reference: seconds(3, (i) => i, start),
			wearable: seconds(3, (i) => i, start - 0.1),
			offsetS: 0.1
		});
		expect(table.n).toBe(3);
		expect([...table.wearable]).toEqual([0, 1, 2]);
	});
	it('takes the nearest reading within the tolerance, the earlier of two, where the plan says so', () => {
		const plan = { ...DEFAULT_PLAN, pairing: { method: 'nearest', toleranceS: 1 } as const };
		const table = pair({ reference: seconds(8), wearable: trace([1001, 1003, 1006.4], [1, 3, 6]), plan });
		expect([...table.tS]).toEqual([1000, 1001, 1002, 1003, 1004, 1006, 1007]);
		expect([...table.wearable]).toEqual([1, 1, 1, 3, 3, 6, 6]);
	});
	it('lets a reading of an event-driven device stand only as long as the plan says, and never one of the reference', () => {
		const sparse = trace([1000, 1010, 1020], [100, 110, 120]);
		const held = pair({ reference: seconds(21), wearable: sparse, plan: { ...DEFAULT_PLAN, holdLimitS: 3 } });
		expect([...held.tS]).toEqual([1000, 1001, 1002, 1003, 1010, 1011, 1012, 1013, 1020]);
		expect(pair({ reference: sparse, wearable: seconds(21), plan: { ...DEFAULT_PLAN, holdLimitS: 3 } }).n).toBe(3);
	});
	it('pairs the wearable’s own readings when the grid is per sample', () => {
		const table = pair({
			reference: seconds(10),
			wearable: trace([999.5, 1000.5, 1004.25, 1012], [1, 2, 3, 4]),
			plan: { ...DEFAULT_PLAN, gridS: 'per-sample' }
		});
		expect([...table.tS]).toEqual([1000.5, 1004.25]);
		expect([...table.reference]).toEqual([100.5, 104.25]);
		expect([...table.wearable]).toEqual([2, 3]);
		expect(table.gridS).toBeNull();
	});
	it('gives an empty table, not an error, when the recordings do not overlap or hold nothing', () => {
		expect(pair({ reference: seconds(10), wearable: seconds(10, undefined, 5000) }).n).toBe(0);
		const empty = pair({ reference: trace([], []), wearable: trace([], []) });
		expect(empty.n).toBe(0);
		expect(coverageOf(empty.counts)).toBeNull();
	});
});

describe('coverage', () => {
	it('would flatter a device that falls silent if missing seconds were not counted', () => {
		const table = pair({ reference: seconds(100), wearable: seconds(50) });
		expect(table.counts).toMatchObject({ referenceS: 100, soundReferenceS: 100, pairedS: 50 });
		expect(coverageOf(table.counts)).toBe(0.5);
	});
	it('is a share of the sound time only: a strap fault is not the wearable’s silence', () => {
		const table = pair({
			reference: seconds(100),
			wearable: seconds(100),
			referenceTags: [tag('reference-fault', 1000, 1020)]
		});
		expect(table.counts).toMatchObject({ referenceS: 100, soundReferenceS: 80, pairedS: 80, primaryOutS: 20 });
		expect(coverageOf(table.counts)).toBe(1);
	});
	it('is the same on every grid', () => {
		const input = { reference: seconds(300), wearable: seconds(200) };
		const counts = ([1, 5, 60, 'per-sample'] as const).map(
			(gridS) => pair({ ...input, plan: { ...DEFAULT_PLAN, gridS } }).counts
		);
		for (const c of counts) expect(c).toEqual(counts[0]);
	});
});

describe('what leaves which analysis', () => {
	const whole = { reference: seconds(60), wearable: seconds(60) };
	it.each(DEFAULT_TAG_KINDS.map((kind) => [kind.key] as const))(
		'no tag of kind %s on a wearable takes a reading out of the primary analysis',
		(key) => {
			const table = pair({ ...whole, wearableTags: [tag(key, 1010, 1020, 'out')] });
			expect(pairsOf(table, 'primary').wearable.length).toBe(60);
		}
	);
	it('takes the sensor’s faults out of the cleaned analysis and says how long each was', () => {
		const table = pair({
			...whole,
			wearableTags: [
				tag('half-rate', 1010, 1020),
				tag('spike', 1018, 1022),
				tag('slow-response', 1030, 1040),
				tag('rest', 1050, 1055)
			]
		});
		expect(pairsOf(table, 'cleaned').wearable.length).toBe(48);
		expect(table.counts).toMatchObject({ pairedS: 60, cleanedS: 48, cleanedOutS: 12 });
		const out = Object.fromEntries(table.counts.byKind.map((k) => [k.kind, [k.taggedS, k.primaryOutS, k.cleanedOutS]]));
		expect(out).toEqual({ rest: [5, 0, 0], 'half-rate': [10, 0, 10], 'slow-response': [10, 0, 0], spike: [4, 0, 4] });
	});
	it('a fault on the reference’s own recording is a reference fault whatever its kind', () => {
		const table = pair({
			...whole,
			referenceTags: [tag('motion-artefact', 1010, 1020), tag('rest', 1030, 1040), tag('unsure', 1050, 1055)]
		});
		expect(pairsOf(table, 'primary').reference.length).toBe(50);
		expect(table.counts.soundReferenceS).toBe(50);
	});
	it('an override moves one tag, but brings no reference fault back', () => {
		const moved = pair({
			...whole,
			wearableTags: [tag('half-rate', 1010, 1020, 'in'), tag('rest', 1030, 1035, 'out')]
		});
		expect(moved.counts.cleanedS).toBe(55);
		const fault = pair({ ...whole, referenceTags: [tag('reference-fault', 1010, 1020, 'in')] });
		expect(fault.counts).toMatchObject({ pairedS: 50, cleanedS: 50 });
	});
	it('a reference fault put on a wearable does nothing and says so', () => {
		const table = pair({ ...whole, wearableTags: [tag('reference-fault', 1010, 1020)] });
		expect(table.counts).toMatchObject({ pairedS: 60, cleanedS: 60 });
		expect(table.notes).toEqual([
			'"Reference fault" stands on a wearable\'s recording and takes nothing out. Put it on the reference.'
		]);
	});
	it('would leak a tagged spike into the cleaned pairs through interpolation', () => {
		const spiky = seconds(60, (i) => (i === 30 ? 230 : 100 + i));
		for (const offsetS of [-0.7, -0.25, 0, 0.4, 0.75]) {
			const table = pair({
				reference: seconds(60),
				wearable: spiky,
				offsetS,
				wearableTags: [tag('spike', 1030, 1031)]
			});
			const cleaned = pairsOf(table, 'cleaned');
			for (let i = 0; i < cleaned.wearable.length; i++)
				expect(Math.abs(cleaned.wearable[i] - cleaned.reference[i])).toBeLessThan(1);
		}
	});
	it('a tag moves with its samples when the offset moves', () => {
		const table = pair({
			reference: seconds(60),
			wearable: seconds(60),
			offsetS: 10,
			wearableTags: [tag('half-rate', 1000, 1005)]
		});
		const tagged = [...table.tS].filter((_, i) => table.wearableTags[i]);
		expect(tagged).toEqual([1010, 1011, 1012, 1013, 1014]);
		expect(kindsInMask(table.wearableTags[0], table.kindKeys)).toEqual(['half-rate']);
	});
	it('what is cleaned is always part of what is primary', () => {
		const anyTag = fc.record({
			kind: fc.constantFrom(...DEFAULT_TAG_KINDS.map((k) => k.key)),
			startS: fc.integer({ min: 990, max: 1050 }),
			lengthS: fc.integer({ min: 1, max: 30 }),
			cleanedOverride: fc.constantFrom<PairingTag['cleanedOverride']>(null, 'in', 'out')
		});
		fc.assert(
			fc.property(
				fc.array(anyTag, { maxLength: 6 }),
				fc.array(anyTag, { maxLength: 6 }),
				fc.constantFrom(1 as const, 5 as const, 'per-sample' as const),
				fc.double({ min: -20, max: 20, noNaN: true }),
				(r, w, gridS, offsetS) => {
					const ended = (tags: typeof r): PairingTag[] =>
						tags.map(({ lengthS, ...t }) => ({ ...t, endS: t.startS + lengthS }));
					const table = pair({
						...whole,
						offsetS,
						referenceTags: ended(r),
						wearableTags: ended(w),
						plan: { ...DEFAULT_PLAN, gridS }
					});
					for (let i = 0; i < table.n; i++) expect(table.inCleaned[i]).toBeLessThanOrEqual(table.inPrimary[i]);
					expect(table.counts.cleanedS).toBeLessThanOrEqual(table.counts.pairedS);
					expect(table.counts.pairedS + table.counts.primaryOutS).toBe(
						table.counts.cleanedS + table.counts.cleanedOutS
					);
				}
			)
		);
	});
});

describe('epochs', () => {
	const plan = { ...DEFAULT_PLAN, gridS: 10 as const };
	it('start at multiples of their length and average both sides over the same seconds', () => {
		const table = pair({
			reference: seconds(30, (i) => 100 + i, 1005),
			wearable: seconds(30, (i) => 90 + i, 1005),
			plan
		});
		expect([...table.tS]).toEqual([1000, 1010, 1020, 1030]);
		expect([...table.reference]).toEqual([102, 109.5, 119.5, 127]);
		expect([...table.wearable]).toEqual([92, 99.5, 109.5, 117]);
	});
	it('a reference fault stays out of the mean, and an epoch that is mostly gone is gone', () => {
		const table = pair({
			reference: seconds(20, (i) => (i < 4 ? 250 : 100)),
			wearable: seconds(20, () => 100),
			plan,
			referenceTags: [tag('reference-fault', 1000, 1004), tag('reference-fault', 1010, 1016)]
		});
		expect([...table.tS]).toEqual([1000]);
		expect([...table.reference]).toEqual([100]);
	});
	it('one left-out second takes its epoch out of the cleaned analysis', () => {
		const table = pair({
			reference: seconds(20),
			wearable: seconds(20),
			plan,
			wearableTags: [tag('spike', 1003, 1004)]
		});
		expect([...table.inPrimary]).toEqual([1, 1]);
		expect([...table.inCleaned]).toEqual([0, 1]);
	});
});

describe('what pairing refuses', () => {
	const whole = { reference: seconds(5), wearable: seconds(5) };
	it.each([
		['offset-not-a-number', { offsetS: NaN }],
		['drift-out-of-range', { driftPpm: -1e6 }],
		['unknown-kind', { wearableTags: [tag('wobble', 1000, 1001)] }],
		['empty-tag', { wearableTags: [tag('rest', 1001, 1001)] }]
	])('%s', (code, wrong) => {
		expect(() => pair({ ...whole, ...wrong })).toThrow(expect.objectContaining({ code }));
	});
});

describe('the plan', () => {
	it('fills in what it leaves out', () => {
		expect(validatePlan({})).toEqual({ ok: true, plan: DEFAULT_PLAN });
		expect(validatePlan(JSON.parse(JSON.stringify(DEFAULT_PLAN)))).toEqual({ ok: true, plan: DEFAULT_PLAN });
	});
	it('cannot take a wearable’s own fault out of the primary analysis', () => {
		for (const kind of DEFAULT_TAG_KINDS) {
			const result = validatePlan({ treatments: { [kind.key]: { primary: 'out', cleaned: 'out' } } });
			expect(result.ok).toBe(kind.blames === 'reference');
		}
	});
	it('names every problem with its place', () => {
		const result = validatePlan({
			gridS: 2,
			pairing: { method: 'interpolate', maxGapS: -1 },
			treatments: { wobble: {} },
			minSession: 4,
			seed: 1.5
		});
		expect(result.ok).toBe(false);
		expect(result.ok ? [] : result.problems.map((p) => p.path).sort()).toEqual([
			'gridS',
			'minSession',
			'pairing.maxGapS',
			'seed',
			'treatments.wobble'
		]);
	});
	it.each([[null], [[]], ['plan'], [{ pairing: { method: 'guess' } }], [{ treatments: [] }], [{ alignment: 'eye' }]])(
		'refuses %j',
		(input) => {
			expect(validatePlan(input).ok).toBe(false);
		}
	);
	it('keeps the default kinds apart by key and letter, clear of the timeline’s other keys', () => {
		const keys = DEFAULT_TAG_KINDS.map((k) => k.key);
		const letters = DEFAULT_TAG_KINDS.flatMap((k) => k.hotkey ?? []);
		expect(new Set(keys).size).toBe(keys.length);
		expect(new Set(letters).size).toBe(letters.length);
		for (const letter of letters) expect('TZFGPLONBAXEIJWKV').not.toContain(letter);
	});
});
