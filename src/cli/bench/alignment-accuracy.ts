/**
 * How right the best-fit shift is, and how honestly it says so, on simulated sessions with known truth.
 *
 *     npx tsx src/cli/bench/alignment-accuracy.ts [--sessions 60] [--seed 5000000] [--minutes M] [--preset typical] [--lines]
 *
 * `--sessions` counts per activity; `--lines` prints one JSON line a session instead of the table. The default seeds
 * are held out: no constant of the search or of its confidence was chosen on them.
 */
import { fileURLToPath } from 'node:url';
import { searchBestFitShift } from '../../lib/signal';
import { simulateSession, type Activity, type Preset, type SimulatedSession } from '../../lib/simulate';

const DYNAMIC: readonly Activity[] = ['run-intervals', 'strength', 'hiit', 'commute', 'ride-outdoor', 'hill-run'];
const STEADY: readonly Activity[] = ['run-steady', 'ride-indoor', 'walk', 'rowing'];
/** A result further than this from the truth is wrong, s. */
const WRONG_S = 5;

export interface StudyLine {
	seed: number;
	activity: Activity;
	minutes: number;
	/** Holds a stop of at least 15 s. */
	withBreak: boolean;
	/** Two different sessions: nothing there to find. */
	unrelated: boolean;
	errorS: number | null;
	inInterval: boolean;
	halfWidthS: number | null;
	reliable: boolean;
	reasonCode: string;
	lead: number | null;
	win: number | null;
	agreement: number | null;
	spread90S: number | null;
	standardErrorS: number | null;
	smoother: string | null;
}

/** Aligns one wearable with a session's reference and compares with the truth. */
export function studyLine(seed: number, session: SimulatedSession, wearableOf: SimulatedSession): StudyLine {
	const wearable = wearableOf.wearables[0];
	const { estimate, evidence } = searchBestFitShift(session.reference.heartRate, wearable.heartRate);
	const unrelated = wearableOf !== session;
	const truthS = wearable.truth.totalShiftS;
	const { bestFitShiftS, ci95 } = estimate;
	return {
		seed,
		activity: session.activity,
		minutes: session.durationS / 60,
		withBreak: session.course.some((c) => c.kind === 'break' && c.lengthS >= 15),
		unrelated,
		errorS: bestFitShiftS === null || unrelated ? null : bestFitShiftS - truthS,
		inInterval: !unrelated && ci95 !== null && ci95[0] <= truthS && truthS <= ci95[1],
		halfWidthS: ci95 ? (ci95[1] - ci95[0]) / 2 : null,
		reliable: estimate.reliable,
		reasonCode: estimate.reasonCode,
		lead: evidence?.lead ?? null,
		win: evidence?.confidence.win ?? null,
		agreement: evidence?.confidence.agreement ?? null,
		spread90S: evidence?.confidence.spread90S ?? null,
		standardErrorS: evidence?.confidence.standardErrorS ?? null,
		smoother: evidence?.refined.smoother.name ?? null
	};
}

export interface StudyRequest {
	sessionsPerActivity: number;
	firstSeed: number;
	preset: Preset;
	/** Length of every session; the activity's usual range when left out. */
	minutes?: number;
}

/** Every activity but rest, each session also against the wearable of the session before it. */
export function* runStudy(request: StudyRequest): Generator<StudyLine> {
	for (const [index, activity] of [...DYNAMIC, ...STEADY].entries()) {
		let before: SimulatedSession | null = null;
		for (let k = 0; k < request.sessionsPerActivity; k++) {
			const seed = request.firstSeed + index * 10_000 + k;
			const session = simulateSession({ seed, activity, preset: request.preset, ...(request.minutes ? { durationS: request.minutes * 60 } : {}) });
			yield studyLine(seed, session, session);
			if (before) yield studyLine(seed, session, before);
			before = session;
		}
	}
}

/** Summary rows of a study, in the words of the targets. */
export function summary(lines: StudyLine[]): string[] {
	const related = lines.filter((l) => !l.unrelated);
	const unrelated = lines.filter((l) => l.unrelated);
	const long = related.filter((l) => l.minutes >= 20);
	const rows = [
		group('dynamic, >= 20 min', long.filter((l) => DYNAMIC.includes(l.activity))),
		group('any with a break, >= 20 min', long.filter((l) => l.withBreak)),
		group('without a break, >= 20 min', long.filter((l) => !l.withBreak)),
		group('shorter than 20 min', related.filter((l) => l.minutes < 20)),
		...[...DYNAMIC, ...STEADY].map((activity) => group(`  ${activity}`, related.filter((l) => l.activity === activity)))
	].filter((row) => row !== null);
	const accepted = related.filter((l) => l.reliable);
	rows.push(
		`accepted as reliable ${share(accepted.length, related.length)}, >= 20 min ${share(long.filter((l) => l.reliable).length, long.length)}, with a break >= 20 min ${share(long.filter((l) => l.reliable && l.withBreak).length, long.filter((l) => l.withBreak).length)}`,
		`reliable yet wrong ${share(accepted.filter(isWrong).length, accepted.length)}   p99 of the accepted ${quantile(accepted.map(size), 0.99).toFixed(2)} s`,
		`interval covers ${share(related.filter((l) => l.inInterval).length, related.length)}, of the accepted ${share(accepted.filter((l) => l.inInterval).length, accepted.length)}   median half width ${quantile(related.map((l) => l.halfWidthS ?? Infinity), 0.5).toFixed(2)} s`,
		`unrelated pairs called reliable ${share(unrelated.filter((l) => l.reliable).length, unrelated.length)}`
	);
	return rows;
}

function group(name: string, lines: StudyLine[]): string | null {
	if (lines.length === 0) return null;
	const sizes = lines.map(size);
	const signed = quantile(lines.map((l) => l.errorS ?? 0), 0.5);
	return `${name.padEnd(30)} n ${String(lines.length).padStart(5)}   p50 ${quantile(sizes, 0.5).toFixed(2)}  p90 ${quantile(sizes, 0.9).toFixed(2)}  p99 ${quantile(sizes, 0.99).toFixed(2)} s   wrong ${share(lines.filter(isWrong).length, lines.length)}   signed median ${signed.toFixed(2)} s   accepted ${share(lines.filter((l) => l.reliable).length, lines.length)}   covered ${share(lines.filter((l) => l.inInterval).length, lines.length)}`;
}

const size = (line: StudyLine) => (line.errorS === null ? Infinity : Math.abs(line.errorS));
const isWrong = (line: StudyLine) => size(line) > WRONG_S;
const share = (part: number, whole: number) => (whole === 0 ? 'none' : `${((100 * part) / whole).toFixed(2)} %`);

export function quantile(values: number[], p: number): number {
	if (values.length === 0) return NaN;
	const sorted = [...values].sort((a, b) => a - b);
	return sorted[Math.min(sorted.length - 1, Math.floor(p * sorted.length))];
}

function main(args: string[]): void {
	const option = (name: string) => (args.includes(name) ? args[args.indexOf(name) + 1] : undefined);
	const request: StudyRequest = {
		sessionsPerActivity: Number(option('--sessions') ?? 60),
		firstSeed: Number(option('--seed') ?? 5_000_000),
		preset: (option('--preset') ?? 'typical') as Preset,
		...(option('--minutes') ? { minutes: Number(option('--minutes')) } : {})
	};
	const lines: StudyLine[] = [];
	for (const line of runStudy(request)) {
		if (args.includes('--lines')) console.log(JSON.stringify(line));
		lines.push(line);
	}
	if (!args.includes('--lines')) for (const row of summary(lines)) console.log(row);
}

if (process.argv[1] === fileURLToPath(import.meta.url)) main(process.argv.slice(2));
