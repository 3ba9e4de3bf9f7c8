/** Track points of TCX and GPX to rows: the part that both formats share. */
import { SampleTable } from '../sample-table';
import { parseDateTime, parseTimeOfDay } from '../table/time-form';
import type { ReadingWarning, ReadOptions } from '../recording';
import { counted } from '../time-text';
import { pointField } from './point-fields';

/** One figure of a point may stand in several elements; the first with a value counts. */
export class TrackPoints {
	readonly table = new SampleTable();
	/** Rows whose cadence came from the element that counts one foot by definition. */
	readonly strideRows: number[] = [];
	private time = '';
	private values = new Map<string, number>();
	private withoutZone = 0;
	private withoutTime = 0;
	private ofDay = 0;
	private decimalCommas = 0;
	private differing = 0;
	private inside = false;

	constructor(private readonly options: ReadOptions) {}

	begin(): void {
		this.inside = true;
		this.time = '';
		this.values.clear();
	}

	get isOpen(): boolean {
		return this.inside;
	}

	/** Takes an element inside a point; `parent` is the element around it. */
	element(name: string, text: string, parent: string): void {
		if (text === '') return;
		if (/^time$/i.test(name)) {
			if (this.time === '') this.time = text;
			return;
		}
		const field = pointField(/^value$/i.test(name) ? parent : name);
		if (!field) return;
		let value = Number(text);
		if (Number.isNaN(value) && /^-?\d+,\d+$/.test(text)) {
			value = Number(text.replace(',', '.'));
			this.decimalCommas++;
		}
		if (!Number.isFinite(value)) return;
		const present = this.values.get(field);
		if (present === undefined || (present === 0 && value !== 0)) this.values.set(field, value);
		else if (field === 'heartRate' && value !== 0 && value !== present) this.differing++;
	}

	end(): void {
		if (!this.inside) return;
		this.inside = false;
		const tS = this.parseTime();
		if (tS !== tS) {
			if (this.values.has('heartRate')) this.withoutTime++;
			return;
		}
		const row = this.table.addRow(tS);
		for (const [field, value] of this.values) {
			if (field !== 'strides') this.table.set(row, field, value);
			else if (!(this.values.get('cadence') ?? 0)) {
				this.table.set(row, 'cadence', value);
				this.strideRows.push(row);
			}
		}
	}

	private parseTime(): number {
		if (this.time === '') return NaN;
		const parsed = parseDateTime(this.time);
		if (parsed) {
			if (parsed.hasZone) return parsed.tS;
			this.withoutZone++;
			return parsed.tS - (this.options.utcOffsetS ?? 0);
		}
		const ofDay = parseTimeOfDay(this.time);
		if (!Number.isNaN(ofDay)) {
			this.ofDay++;
			const day = this.options.startS === undefined ? 0 : Math.floor(this.options.startS / 86_400) * 86_400;
			return day + ofDay;
		}
		const number = Number(this.time);
		if (number > 1e17) return number / 1e9;
		if (number > 1e11) return number / 1e3;
		return number > 1e8 ? number : NaN;
	}

	get withoutDate(): boolean {
		return this.ofDay > 0 && this.options.startS === undefined;
	}

	warnings(): ReadingWarning[] {
		const warnings: ReadingWarning[] = [];
		if (this.withoutZone > 0)
			warnings.push({
				code: 'no-time-zone',
				message:
					this.options.utcOffsetS === undefined
						? `${counted(this.withoutZone, 'time')} carry no time zone. They are read as UTC; if the device showed local time, give its offset.`
						: `${counted(this.withoutZone, 'time')} carry no time zone. They are read as ${this.options.utcOffsetS / 3600} h ahead of UTC, as given.`
			});
		if (this.ofDay > 0)
			warnings.push({
				code: 'no-date',
				message: `${counted(this.ofDay, 'time')} have no date. They stand on ${this.options.startS === undefined ? '1 January 1970 until the date is given' : 'the day given at import'}.`
			});
		if (this.withoutTime > 0)
			warnings.push({
				code: 'no-time-stamp',
				message: `${counted(this.withoutTime, 'track point')} with a heart rate carry no readable time and are left out.`
			});
		if (this.decimalCommas > 0)
			warnings.push({
				code: 'decimal-comma',
				message: `${counted(this.decimalCommas, 'value')} are written with a decimal comma, which XML does not allow. They are read all the same.`
			});
		if (this.differing > 0)
			warnings.push({
				code: 'heart-rate-twice',
				message: `${counted(this.differing, 'track point')} hold two different heart rates. The first is used.`
			});
		return warnings;
	}
}
