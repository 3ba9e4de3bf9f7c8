/**
 * Agreement of a study per device: figures in both analyses, by activity, where it went wrong, and binned readings for
 * the plots. Everything comes from the one engine over remembered pair tables.
 */
import { isDetermined, valueOrNull, type Figure, type Interval } from '../../agreement/determinable';
import { agreementFigures } from '../../agreement/figures';
import { pairsOf } from '../../agreement/pair-table';
import type { PairGroup } from '../../agreement/sessions';
import { hexCells, packCells, type HexLattice } from '../../charts/hexagons';
import type { BothAnalyses, DeviceAgreement, FigureSet, KindLeftOut, ShownFigure } from '../../results/agreement-view';
import type { StudyBasis } from './load-sessions';
import type { WearablePairs } from './session-pairs';

export type Analysis = keyof BothAnalyses<unknown>;

/** Cells of the plots, in whole bpm, so that every cell holds equally many of the whole numbers that devices write. */
const SCATTER: HexLattice = { cellX: 2, rowY: 3 };
const DIFFERENCE: HexLattice = { cellX: 2, rowY: 2 };
const SHARE_STEP_BPM = 0.5;
const SHARE_MAX_BPM = 30;

/** The pairs of one wearable's session that count in an analysis, as the engine takes them. */
export function groupOf(pairs: WearablePairs, analysis: Analysis): PairGroup {
	const { table, session } = pairs;
	return {
		session: session.code,
		participant: session.participantCode ?? undefined,
		...pairsOf(table, analysis),
		soundReferenceS: table.counts.soundReferenceS,
		pairedS: table.counts.pairedS
	};
}

/** All that the agreement page shows of one device. `pairs` are that device's, one entry a session. */
export function deviceAgreement(
	device: { number: number; name: string },
	pairs: WearablePairs[],
	basis: StudyBasis,
	activityOrder: string[]
): DeviceAgreement {
	const both = <T>(of: (analysis: Analysis) => T): BothAnalyses<T> => ({ primary: of('primary'), cleaned: of('cleaned') });
	const groups = both((analysis) => pairs.map((p) => groupOf(p, analysis)));
	const activities = [...new Set([...activityOrder, ...pairs.map((p) => p.session.activity ?? '')])];
	return {
		number: device.number,
		name: device.name,
		firmwares: [...new Set(pairs.map((p) => p.track.firmware))],
		figures: both((analysis) => figureSet(groups[analysis], pairs)),
		leftOutShare: leftOutShare(pairs),
		kinds: kindsLeftOut(pairs, basis),
		lattice: { scatter: SCATTER, difference: DIFFERENCE },
		scatter: both((analysis) => binned(groups[analysis], SCATTER, (r, w) => [r, w])),
		difference: both((analysis) => binned(groups[analysis], DIFFERENCE, (r, w) => [(r + w) / 2, w - r])),
		cumulative: both((analysis) => cumulativeShare(groups[analysis])),
		byActivity: activities
			.map((activity) => ({ activity, of: pairs.filter((p) => (p.session.activity ?? '') === activity) }))
			.filter(({ of }) => of.length > 0)
			.map(({ activity, of }) => ({
				activity: activity || 'Activity not said yet',
				figures: both((analysis) => figureSet(of.map((p) => groupOf(p, analysis)), of)),
				leftOutShare: leftOutShare(of)
			}))
	};
}

function figureSet(groups: PairGroup[], pairs: WearablePairs[]): FigureSet {
	const figures = agreementFigures(groups);
	const seconds = total(groups.map((g, i) => g.reference.length * (pairs[i].table.gridS ?? meanIntervalS(pairs[i]))));
	const counted = groups.filter((g) => g.reference.length > 0);
	return {
		n: figures.n,
		sessions: figures.sessions,
		participants: figures.participants ?? new Set(counted.map((g) => g.participant ?? g.session)).size,
		hours: seconds / 3600,
		coverage: shown(figures.coverage),
		bias: shown(figures.bias, figures.biasCi95),
		lower: limit(figures.loa, 0, figures.loaLowerCi95),
		upper: limit(figures.loa, 1, figures.loaUpperCi95),
		sd: shown(figures.sd),
		mae: shown(figures.mae, figures.maeCi95),
		mapePct: shown(figures.mape, figures.mapeCi95),
		rmse: shown(figures.rmse),
		pearsonR: shown(figures.pearsonR),
		ccc: shown(figures.ccc, figures.cccCi95),
		within5Bpm: shown(figures.within5bpm, figures.within5bpmCi95),
		within10Pct: shown(figures.within10pct, figures.within10pctCi95)
	};
}

const total = (values: number[]) => values.reduce((sum, v) => sum + v, 0);
const meanIntervalS = ({ table }: WearablePairs) => (table.n > 1 ? (table.tS[table.n - 1] - table.tS[0]) / (table.n - 1) : 0);

function shown(figure: Figure, ci95: Interval | null = null): ShownFigure {
	return {
		value: valueOrNull(figure),
		ci95: ci95 === null ? null : valueOrNull(ci95),
		why: isDetermined(figure) ? null : figure.notDeterminable
	};
}

function limit(loa: Interval, end: 0 | 1, ci95: Interval): ShownFigure {
	return isDetermined(loa) ? { value: loa[end], ci95: valueOrNull(ci95), why: null } : { value: null, ci95: null, why: loa.notDeterminable };
}

function leftOutShare(pairs: WearablePairs[]): number {
	const paired = total(pairs.map((p) => p.table.counts.pairedS));
	return paired === 0 ? 0 : total(pairs.map((p) => p.table.counts.pairedS - p.table.counts.cleanedS)) / paired;
}

function kindsLeftOut(pairs: WearablePairs[], basis: StudyBasis): KindLeftOut[] {
	const paired = total(pairs.map((p) => p.table.counts.pairedS));
	return basis.kinds
		.map((kind): KindLeftOut => {
			const times = pairs.map((p) => p.table.counts.byKind.find((k) => k.kind === kind.key));
			const tags = pairs.map((p) => p.track.tags.filter((t) => t.kind === kind.key).length);
			return {
				key: kind.key,
				name: kind.name,
				texture: kind.texture,
				minutes: total(pairs.map((p) => total(p.track.tags.filter((t) => t.kind === kind.key).map((t) => t.endS - t.startS)))) / 60,
				share: paired === 0 ? 0 : total(times.map((t) => t?.cleanedOutS ?? 0)) / paired,
				segments: total(tags),
				sessions: tags.filter((n) => n > 0).length,
				leavesCleaned: times.some((t) => (t?.cleanedOutS ?? 0) > 0)
			};
		})
		.filter((k) => k.segments > 0 && basis.kinds.find((x) => x.key === k.key)?.blames === 'wearable')
		.sort((a, b) => b.minutes - a.minutes);
}

function binned(groups: PairGroup[], lattice: HexLattice, point: (reference: number, wearable: number) => [number, number]) {
	const cells = new Map<number, number>();
	for (const { reference, wearable } of groups) {
		const x = new Float64Array(reference.length);
		const y = new Float64Array(reference.length);
		for (let i = 0; i < reference.length; i++) [x[i], y[i]] = point(reference[i], wearable[i]);
		hexCells(x, y, lattice, cells);
	}
	return packCells(cells);
}

/** Share of readings with an absolute error of at most 0, 0.5, … 30 bpm. */
function cumulativeShare(groups: PairGroup[]): number[] {
	const bins = new Uint32Array(SHARE_MAX_BPM / SHARE_STEP_BPM + 1);
	let n = 0;
	for (const { reference, wearable } of groups)
		for (let i = 0; i < reference.length; i++) {
			n++;
			const bin = Math.ceil(Math.abs(wearable[i] - reference[i]) / SHARE_STEP_BPM);
			if (bin < bins.length) bins[bin]++;
		}
	if (n === 0) return [];
	let sum = 0;
	return Array.from(bins, (count) => (sum += count) / n);
}
