import { expect, test } from 'vitest';
import { DEFAULT_PLAN } from '../../agreement/plan';
import { pairTraces } from '../../agreement/pairing';
import { DEFAULT_TAG_KINDS } from '../../agreement/tag-kinds';
import { PAIR_COLUMNS, pairsCsv, pairsDictionary } from './pairs-export';
import type { WearablePairs } from './session-pairs';

const START_S = Date.UTC(2026, 9, 14, 7, 31) / 1000;

function pairs(): WearablePairs {
	const tS = Float64Array.from({ length: 20 }, (_, i) => START_S + i);
	const reference = { kind: 'heartRate' as const, tS, value: tS.map((_, i) => 120 + i) };
	const wearable = { kind: 'heartRate' as const, tS: tS.map((t) => t - 3), value: tS.map((_, i) => 121 + i) };
	const tag = { kind: 'cadence-lock', startS: START_S - 3 + 5, endS: START_S - 3 + 8, cleanedOverride: null };
	const table = pairTraces({ reference, wearable, offsetS: 3, driftPpm: 0, referenceTags: [], wearableTags: [tag], plan: DEFAULT_PLAN, kinds: DEFAULT_TAG_KINDS });
	const track = (number: number) => ({
		recordingId: 'x', number, name: number ? 'Loop, "two"' : 'Strap', shortName: 'Loop', firmware: '4.1', heartRate: null,
		alignment: { version: 1, offsetS: 3, driftPpm: 0, method: 'hand', reliable: null }, tags: number ? [tag] : [], proposals: 0
	});
	return {
		session: {
			sessionId: 's', code: 'S07', title: '', activity: 'Hill running', participantCode: 'P03', state: 'reviewed', startsAt: new Date(START_S * 1000),
			endsAt: new Date((START_S + 20) * 1000), annotator: 'RT', reference: track(0), wearables: [track(1)], fingerprint: ''
		},
		track: track(1),
		table
	};
}

const parse = (text: string) => text.trim().split('\r\n').map((line) => line.match(/("([^"]|"")*"|[^,]*)(,|$)/g)!.map((c) => c.replace(/,$/, '').replace(/^"|"$/g, '').replaceAll('""', '"')).slice(0, PAIR_COLUMNS.length));

test('every pair carries session, wearer, device, time, values, offset, tags and where it counts', () => {
	const [head, ...rows] = parse([...pairsCsv([pairs()], 'all')].join(''));
	expect(head).toEqual(PAIR_COLUMNS.map((c) => c.name));
	const row = Object.fromEntries(head.map((name, i) => [name, rows[6][i]]));
	expect(row).toMatchObject({ session: 'S07', participant: 'P03', device: 'Loop, "two"', time: '2026-10-14T07:31:06.000Z', reference: '126', wearable: '127', offset_s: '3', offset_from: 'hand', wearable_tags: 'cadence-lock', in_primary: '1', in_cleaned: '0' });
});

test('the cleaned file leaves out exactly the pairs that the plan leaves out', () => {
	const all = parse([...pairsCsv([pairs()], 'all')].join('')).slice(1);
	const cleaned = parse([...pairsCsv([pairs()], 'cleaned')].join('')).slice(1);
	expect(cleaned).toEqual(all.filter((r) => r.at(-1) === '1'));
	expect(cleaned.length).toBeLessThan(all.length);
});

test('the dictionary explains every column and every kind of tag', () => {
	const text = pairsDictionary({ plan: DEFAULT_PLAN, planVersion: 2, kinds: DEFAULT_TAG_KINDS }, { title: 'Autumn trail study', slug: 'autumn-trail' });
	for (const c of PAIR_COLUMNS) expect(text).toContain(`column,${c.name},`);
	for (const k of DEFAULT_TAG_KINDS) expect(text).toContain(`tag,${k.key},`);
});
