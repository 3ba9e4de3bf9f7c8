import { describe, expect, test } from 'vitest';
import { DEFAULT_PLAN } from '../agreement/plan';
import type { DeviceAgreement, FigureSet, ShownFigure } from './agreement-view';
import { agreementSentence, limitsInWords } from './sentences';

const figure = (value: number | null, why: string | null = null): ShownFigure => ({ value, ci95: null, why });

function figureSet(change: Partial<FigureSet> = {}): FigureSet {
	return {
		n: 1000, sessions: 8, participants: 4, hours: 1, coverage: figure(0.99), bias: figure(-0.44), lower: figure(-14.4), upper: figure(13.5), sd: figure(7),
		mae: figure(4), mapePct: figure(3), rmse: figure(7), pearsonR: figure(0.95), ccc: figure(0.94), within5Bpm: figure(0.8), within10Pct: figure(0.9), ...change
	};
}

function device(primary: Partial<FigureSet>, byActivity: DeviceAgreement['byActivity'] = []): DeviceAgreement {
	return {
		number: 1, name: 'Wrenna Loop 2', firmwares: ['4.1'], figures: { primary: figureSet(primary), cleaned: figureSet() }, leftOutShare: 0, kinds: [],
		lattice: { scatter: { cellX: 2, rowY: 2 }, difference: { cellX: 2, rowY: 2 } }, scatter: { primary: [], cleaned: [] }, difference: { primary: [], cleaned: [] },
		cumulative: { primary: [], cleaned: [] }, byActivity
	};
}

const activity = (name: string, lower: number | null, upper: number | null) => ({
	activity: name,
	figures: { primary: figureSet({ lower: figure(lower), upper: figure(upper) }), cleaned: figureSet() },
	leftOutShare: 0
});

describe('the sentence that opens the agreement page', () => {
	test('names direction and limits with a true minus sign', () => {
		expect(agreementSentence(device({}))).toBe('Reads 0.4 bpm low on average. 95 % of readings are expected between −14 and +14 bpm of the strap.');
	});
	test('does not call a bias that rounds to nothing high or low', () => {
		expect(agreementSentence(device({ bias: figure(0.04) }))).toMatch(/^Reads neither high nor low/);
		expect(agreementSentence(device({ bias: figure(-0.05) }))).toMatch(/^Reads 0\.1 bpm low/);
	});
	test('says that limits are not determinable instead of leaving them out', () => {
		expect(agreementSentence(device({ sessions: 1, lower: figure(null, 'one session'), upper: figure(null, 'one session') }))).toContain('not determinable from one session');
	});
	test('names the widest activity only where there is another to compare with', () => {
		expect(agreementSentence(device({}, [activity('Hill running', -20, 20)]))).not.toContain('widest');
		expect(agreementSentence(device({}, [activity('Rowing ergometer', -5, 5), activity('Hill running', -20, 20)]))).toContain('widest in hill running');
		expect(agreementSentence(device({}, [activity('Rowing ergometer', -5, 5), activity('Hill running', null, null)]))).not.toContain('widest');
	});
});

describe('limits that the reader must know', () => {
	const basis = { plan: DEFAULT_PLAN, planVersion: 1, include: 'reviewed' as const };
	test('one wearer is said', () => {
		expect(limitsInWords(device({ participants: 1 }), basis).join(' ')).toContain('One wearer only');
	});
	test('fewer sessions or wearers than the plan asks for: no verdict', () => {
		expect(limitsInWords(device({ sessions: DEFAULT_PLAN.minSessions - 1 }), basis).join(' ')).toContain('No verdict');
		expect(limitsInWords(device({ sessions: DEFAULT_PLAN.minSessions, participants: DEFAULT_PLAN.minParticipants }), basis).join(' ')).not.toContain('No verdict');
	});
	test('low coverage and mixed firmware are said', () => {
		const mixed = { ...device({ coverage: figure(0.5) }), firmwares: ['4.1', '4.2'] };
		const words = limitsInWords(mixed, basis).join(' ');
		expect(words).toContain('Coverage is 50 %');
		expect(words).toContain('4.1, 4.2');
	});
	test('counting sessions before review is said', () => {
		expect(limitsInWords(device({}), { ...basis, include: 'aligned' })[0]).toContain('nobody has reviewed');
	});
});
