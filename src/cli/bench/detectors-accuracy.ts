/**
 * How well the detectors find the faults of simulated sessions, and how often they see some where there are none.
 *
 *     npx tsx src/cli/bench/detectors-accuracy.ts [--sessions 30] [--seed 7000000] [--preset typical] [--missed KIND] [--false KIND]
 *
 * `--sessions` counts per activity. The default seeds are held out: no threshold was chosen on them. A proposal is
 * right when it covers a fault of its kind with at least half of their union (a spike: centres within 4 s).
 * Sessions stand where the search puts them, or by the truth where it is more than 5 s off: the figures are
 * conditional on a right alignment.
 */
import { fileURLToPath } from 'node:url';
import { searchBestFitShift } from '../../lib/signal';
import { detectEvents, PROPOSED_KINDS, type Proposal } from '../../lib/signal/detect';
import { ACTIVITIES, simulateSession, type Activity, type Preset, type SimulatedSession } from '../../lib/simulate';

interface TrueEvent {
	kind: string;
	/** All on the reference's clock; any of the extents may be matched. */
	extents: [number, number][];
}

const LEAST_IOU = 0.5;
const SPIKE_CENTRE_S = 4;
/** A break shorter than this leaves no mark, s. */
const SHORTEST_REST_S = 12;

export interface KindCount {
	truth: number;
	proposed: number;
	right: number;
	found: number;
	iouSum: number;
}

/** What there is to find in a session: faults that show, the strap's faults while it records, breaks without movement. */
export function eventsOf(session: SimulatedSession): TrueEvent[] {
	const events: TrueEvent[] = [];
	const wearable = session.wearables[0];
	for (const { kind, visible, startS, endS } of wearable.truth.events) {
		if (!visible) continue;
		// A frozen value is frozen from its first second, though it is off only later.
		events.push({ kind, extents: kind === 'hold' ? [[startS, endS], [visible.startS, visible.endS]] : [[visible.startS, visible.endS]] });
	}
	for (const f of session.reference.faults) events.push({ kind: 'reference-fault', extents: [[f.startS, f.endS]] });
	if (session.activity !== 'rest')
		for (const c of session.course) if (c.kind === 'break' && c.moving === 0 && c.lengthS >= SHORTEST_REST_S) events.push({ kind: 'rest', extents: [[c.startS, c.startS + c.lengthS]] });
	return events;
}

export interface SessionResult {
	proposals: Proposal[];
	/** On the reference's clock, in the order of the proposals. */
	spans: [number, number][];
	right: boolean[];
	events: TrueEvent[];
	found: boolean[];
	iou: number[];
	hours: number;
}

export function judgeSession(session: SimulatedSession): SessionResult {
	const wearable = session.wearables[0];
	const { truth } = wearable;
	const estimate = searchBestFitShift(session.reference.heartRate, wearable.heartRate).estimate.bestFitShiftS;
	const offsetS = estimate === null || Math.abs(estimate - truth.totalShiftS) > 5 ? truth.totalShiftS : estimate;
	const proposals = detectEvents({
		reference: session.reference.heartRate,
		wearable: wearable.heartRate,
		alignment: { offsetS, driftPpm: 0 },
		cadence: session.reference.cadence ?? undefined,
		speed: session.reference.speed ?? undefined
	});
	const midOwnS = session.startS + session.durationS / 2 - truth.clockOffsetS;
	const toTrueS = (ownS: number) => ownS + truth.clockOffsetS + truth.driftPpm * 1e-6 * (ownS - midOwnS);
	const spans = proposals.map((p): [number, number] => (p.on === 'reference' ? [p.startS, p.endS] : [toTrueS(p.startS), toTrueS(p.endS)]));
	const events = eventsOf(session);
	const right = proposals.map(() => false);
	const found = events.map(() => false);
	const iou = events.map(() => 0);
	events.forEach((event, e) => {
		let best = -1;
		proposals.forEach((proposal, p) => {
			if (proposal.kind !== event.kind || right[p]) return;
			const overlap = Math.max(...event.extents.map((extent) => likeness(event.kind, extent, spans[p])));
			if (overlap >= LEAST_IOU && overlap > iou[e]) {
				iou[e] = overlap;
				best = p;
			}
		});
		if (best >= 0) {
			right[best] = true;
			found[e] = true;
		}
	});
	return { proposals, spans, right, events, found, iou, hours: session.durationS / 3600 };
}

function likeness(kind: string, [a, b]: [number, number], [c, d]: [number, number]): number {
	if (kind === 'spike') return Math.abs(a + b - c - d) / 2 <= SPIKE_CENTRE_S ? 1 : 0;
	const shared = Math.min(b, d) - Math.max(a, c);
	return shared <= 0 ? 0 : shared / (Math.max(b, d) - Math.min(a, c));
}

function main(args: string[]): void {
	const option = (name: string) => (args.includes(name) ? args[args.indexOf(name) + 1] : undefined);
	const perActivity = Number(option('--sessions') ?? 30);
	const firstSeed = Number(option('--seed') ?? 7_000_000);
	const preset = (option('--preset') ?? 'typical') as Preset;
	const counts = new Map<string, KindCount>(PROPOSED_KINDS.map((kind) => [kind, { truth: 0, proposed: 0, right: 0, found: 0, iouSum: 0 }]));
	let hours = 0;
	for (const [index, activity] of ACTIVITIES.entries()) {
		for (let k = 0; k < perActivity; k++) {
			const seed = firstSeed + index * 10_000 + k;
			const session = simulateSession({ seed, activity, preset });
			const result = judgeSession(session);
			hours += result.hours;
			tally(counts, result, activity);
			const at = (s: number) => (s - session.startS).toFixed(0);
			const near = (t: [number, number], list: string[]) => list.filter((_, i) => i >= 0).join('; ') + (t ? '' : '');
			result.events.forEach((e, i) => {
				if (result.found[i] || e.kind !== option('--missed')) return;
				const [a, b] = e.extents[e.extents.length - 1];
				const there = result.proposals.flatMap((p, j) => (result.spans[j][1] > a - 10 && result.spans[j][0] < b + 10 ? [`${p.kind} ${at(result.spans[j][0])} to ${at(result.spans[j][1])}`] : []));
				const c = session.wearables[0].character;
				console.log(`missed ${activity} ${seed}: ${e.kind} ${at(a)} to ${at(b)} (tau ${c.tauS.toFixed(0)} window ${c.windowS.toFixed(0)}${c.irregular ? ' irregular' : ''}); proposed there: ${near([a, b], there) || 'nothing'}`);
			});
			result.proposals.forEach((p, j) => {
				if (result.right[j] || p.kind !== option('--false')) return;
				const [a, b] = result.spans[j];
				const there = result.events.flatMap((e) => (e.extents[0][1] > a - 10 && e.extents[0][0] < b + 10 ? [`${e.kind} ${at(e.extents[0][0])} to ${at(e.extents[0][1])}`] : []));
				console.log(`false ${activity} ${seed}: ${p.kind} ${at(a)} to ${at(b)} score ${p.score} ${p.evidence} true there: ${near([a, b], there) || 'nothing'}`);
			});
		}
	}
	console.log(`${perActivity * ACTIVITIES.length} sessions, ${hours.toFixed(0)} h, preset ${preset}, seeds from ${firstSeed}`);
	for (const [kind, c] of counts)
		console.log(
			`${kind.padEnd(16)} truth ${String(c.truth).padStart(5)}  proposed ${String(c.proposed).padStart(5)}  precision ${ratio(c.right, c.proposed)}  recall ${ratio(c.found, c.truth)}  mean IoU ${ratio(c.iouSum, c.found)}  false/h ${((c.proposed - c.right) / hours).toFixed(3)}`
		);
}

function tally(counts: Map<string, KindCount>, { proposals, right, events, found, iou }: SessionResult, activity: Activity): void {
	// Somebody who rests throughout takes no break: rests proposed there are neither right nor wrong.
	const counted = (kind: string) => !(kind === 'rest' && activity === 'rest');
	proposals.forEach((p, i) => {
		const c = counts.get(p.kind);
		if (!c || !counted(p.kind)) return;
		c.proposed++;
		if (right[i]) c.right++;
	});
	events.forEach((e, i) => {
		const c = counts.get(e.kind);
		if (!c) return;
		c.truth++;
		if (!found[i]) return;
		c.found++;
		c.iouSum += iou[i];
	});
}

const ratio = (part: number, of: number) => (of === 0 ? 'none' : (part / of).toFixed(2));

if (process.argv[1] === fileURLToPath(import.meta.url)) main(process.argv.slice(2));
