/**
 * What every reader gives: one device's file of one session, as traces on the device's own clock.
 *
 * Readers never throw on bad content. They return a `Reading`: either a recording with every oddity told in
 * `warnings`, or a refusal with one sentence and its remedy.
 */

/** Channels that a recording can hold. One kind occurs at most once in a recording. */
export const CHANNEL_KINDS = [
	'heartRate',
	'rrInterval',
	'cadence',
	'speed',
	'power',
	'altitude',
	'distance',
	'temperature'
] as const;
export type ChannelKind = (typeof CHANNEL_KINDS)[number];

/** Unit in which the values of a channel are kept, whatever the file used. */
export const CHANNEL_UNIT: Record<ChannelKind, string> = {
	heartRate: 'bpm',
	rrInterval: 'ms',
	cadence: '1/min',
	speed: 'm/s',
	power: 'W',
	altitude: 'm',
	distance: 'm',
	temperature: '°C'
};

/**
 * One channel over time, columnar.
 *
 * `tS` is strictly increasing, epoch seconds (UTC) on the **device's own clock**; same length as `value`.
 * Only valid values are kept: an empty or impossible reading (a heart rate of 0 included) is absent, so a gap is
 * a gap in `tS`. Cadence counts both feet (steps/min) or crank turns (rev/min). An RR interval stands at the
 * time of the beat that ends it.
 */
export interface Trace {
	kind: ChannelKind;
	tS: Float64Array;
	value: Float64Array;
	/**
	 * What the file held for this channel before values that share a time stamp were merged; set by the readers.
	 * Counts values that are neither empty nor 0 (0 counts for altitude and temperature, where it is a value like any other).
	 */
	inFile?: { n: number; min: number; max: number };
}

export type FileFormat = 'fit' | 'tcx' | 'gpx' | 'csv' | 'rr-text';

/** What the file says about the device that made it; null where it says nothing. */
export interface RecordedDevice {
	maker: string | null;
	product: string | null;
	serial: string | null;
	firmware: string | null;
}

/** Nothing is known about the device. */
export const UNKNOWN_DEVICE: RecordedDevice = { maker: null, product: null, serial: null, firmware: null };

/** One of several heart-rate sources in one file, to choose from with `ReadOptions.heartRateSource`. */
export interface HeartRateSource {
	/** Stable within the file: `record`, `developer`, `stored-beats`, a column name. */
	key: string;
	/** How the file names it. */
	label: string;
	n: number;
	min: number;
	max: number;
}

/** What the one who imports knows and the file does not say. */
export interface ReadOptions {
	/** Which of several heart-rate sources becomes the heart-rate channel; default the file's main one. */
	heartRateSource?: string;
	/** Seconds that the file's clock is ahead of UTC, used for time stamps that carry no zone; default 0 with a warning. */
	utcOffsetS?: number;
	/** Start in epoch seconds for files that hold only elapsed seconds or times of day. */
	startS?: number;
	/** The present in epoch seconds; later time stamps are warned of. Without it only dates past 2100 are. */
	nowS?: number;
	/** Upper bound of what a compressed file may unpack to, bytes; default 200 MB. */
	maxUnpackedBytes?: number;
}

/** Something odd that the reader met and how it dealt with it. */
export interface ReadingWarning {
	/** Stable, kebab-case: `missing-tail`, `wrong-crc`, `duplicate-time`, `backward-step`, `gap`, ... */
	code: string;
	/** A plain sentence with the place (time, line, byte) and what was done. */
	message: string;
	/** Epoch seconds, byte or line, where it is known. */
	at?: { tS?: number; byte?: number; line?: number };
}

export interface Recording {
	format: FileFormat;
	/** Name and version of the reader, kept with the data so that a later reader can be told apart. */
	readerVersion: string;
	device: RecordedDevice;
	/** The file's own word for the activity, lower case, or null. */
	activity: string | null;
	/**
	 * First and last time stamp of the records (rows, track points), epoch seconds on the device's clock; of the traces
	 * where a file holds nothing but intervals. Beats that a strap stored and RR intervals may reach beyond.
	 */
	startS: number;
	endS: number;
	traces: Trace[];
	/** Heart-rate sensors that the file lists as connected, so that a relayed strap can be recognised; absent where it lists none. */
	heartRateSensors?: RecordedDevice[];
	/** Present where the file holds more than one heart-rate source: the first is the one in `traces`. */
	heartRateSources?: HeartRateSource[];
	warnings: ReadingWarning[];
}

export type Reading =
	| { ok: true; recording: Recording }
	| { ok: false; refusal: { code: string; message: string }; warnings: ReadingWarning[] };

/** The trace of one kind, or undefined. */
export function traceOf(recording: Pick<Recording, 'traces'>, kind: ChannelKind): Trace | undefined {
	return recording.traces.find((t) => t.kind === kind);
}
