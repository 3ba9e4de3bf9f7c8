/** What the agreement page shows of one device, as the server sends it: figures, where it went wrong, binned readings. */
import type { Texture } from '../agreement/tag';
import type { HexCells, HexLattice } from '../charts/hexagons';

/** A figure that has no value says why; `value` null goes with a sentence. */
export interface ShownFigure {
	value: number | null;
	ci95: [number, number] | null;
	why: string | null;
}

export interface FigureSet {
	n: number;
	sessions: number;
	participants: number;
	/** Hours of pairs. */
	hours: number;
	coverage: ShownFigure;
	bias: ShownFigure;
	lower: ShownFigure;
	upper: ShownFigure;
	sd: ShownFigure;
	mae: ShownFigure;
	mapePct: ShownFigure;
	rmse: ShownFigure;
	pearsonR: ShownFigure;
	ccc: ShownFigure;
	within5Bpm: ShownFigure;
	within10Pct: ShownFigure;
}

export interface BothAnalyses<T> {
	primary: T;
	cleaned: T;
}

export interface KindLeftOut {
	key: string;
	name: string;
	texture: Texture;
	minutes: number;
	/** Share of the paired time, 0 to 1. */
	share: number;
	segments: number;
	sessions: number;
	/** Whether the kind leaves the cleaned analysis. */
	leavesCleaned: boolean;
}

export interface DeviceAgreement {
	number: number;
	name: string;
	firmwares: string[];
	figures: BothAnalyses<FigureSet>;
	/** Share of paired time that leaves the cleaned analysis, each second once. */
	leftOutShare: number;
	kinds: KindLeftOut[];
	lattice: { scatter: HexLattice; difference: HexLattice };
	scatter: BothAnalyses<HexCells>;
	difference: BothAnalyses<HexCells>;
	/** Share of readings within 0, 0.5, 1, … bpm. */
	cumulative: BothAnalyses<number[]>;
	/** Lowest and highest heart rate on the plots, bpm, the same for all devices. */
	byActivity: { activity: string; figures: BothAnalyses<FigureSet>; leftOutShare: number }[];
}
