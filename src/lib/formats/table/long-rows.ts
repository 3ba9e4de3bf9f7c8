import type { ChannelKind, ReadingWarning } from '../recording';
import type { SampleTable } from '../sample-table';
import { counted, timeText } from '../time-text';

/** Rows of a long table: one row a time, its channels gathered from wherever they stand in the file. */
export class LongRows {
	private readonly rowAt = new Map<number, number>();
	private readonly lastOf = new Map<ChannelKind, number>();
	private backward = 0;
	private backwardAt = NaN;
	private repeated = 0;
	private repeatedAt = NaN;
	private readonly gathered: { tS: number; kind: ChannelKind; value: number }[] = [];

	constructor(private readonly table: SampleTable) {}

	add(tS: number, kind: ChannelKind, value: number): void {
		const last = this.lastOf.get(kind) ?? -Infinity;
		if (tS < last && this.backward++ === 0) this.backwardAt = tS;
		this.lastOf.set(kind, tS);
		this.gathered.push({ tS, kind, value });
	}

	/** Fills the table in order of time, and says what was odd within a channel; between channels the order means nothing. */
	finish(): ReadingWarning[] {
		const order = this.gathered.map((_, i) => i).sort((a, b) => this.gathered[a].tS - this.gathered[b].tS || a - b);
		for (const i of order) {
			const { tS, kind, value } = this.gathered[i];
			let row = this.rowAt.get(tS);
			if (row === undefined) {
				row = this.table.addRow(tS);
				this.rowAt.set(tS, row);
			}
			const present = this.table.get(row, kind);
			if (present === present) {
				if (this.repeated++ === 0) this.repeatedAt = tS;
			} else this.table.set(row, kind, value);
		}
		const warnings: ReadingWarning[] = [];
		if (this.backward > 0)
			warnings.push({
				code: 'backward-step',
				message: `Within a channel the clock steps back ${counted(this.backward, 'time')}, first to ${timeText(this.backwardAt)}. The rows are put in order of time; no time is changed.`,
				at: { tS: this.backwardAt }
			});
		if (this.repeated > 0)
			warnings.push({
				code: 'duplicate-time',
				message: `${counted(this.repeated, 'row')} repeat a channel at a time that it already has, first at ${timeText(this.repeatedAt)}. The first value stays.`,
				at: { tS: this.repeatedAt }
			});
		return warnings;
	}
}
