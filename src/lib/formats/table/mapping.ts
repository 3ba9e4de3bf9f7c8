/** How a table is read: guessed from its content, shown to the importer, changed by her, remembered per source. */
import type { ChannelKind } from '../recording';
import type { Delimiter } from './cells';
import type { ColumnShape } from './split-decimals';
import type { DateOrder, TimeForm } from './time-form';

export interface ChannelColumn {
	/** Index of the column, from 0. */
	column: number;
	kind: ChannelKind;
	/** Value in the channel's unit = value in the file × factor + offset. */
	factor: number;
	offset: number;
	/** True where a cadence surely counts both feet. */
	countsSteps?: boolean;
}

export interface TableMapping {
	/** `wide`: one column a channel. `long`: one row a channel and time. `transposed`: one line a channel; columns below then count lines. */
	layout: 'wide' | 'long' | 'transposed';
	delimiter: Delimiter;
	decimalComma: boolean;
	/** Present where a comma parts the cells and is the decimal mark too: the columns that it splits, and the shape of each column. */
	splitDecimals?: { columns: number[]; shapes: ColumnShape[] };
	/** Line of the column names, from 1; null where there are none. */
	headerLine: number | null;
	/** First line that may hold values, from 1. */
	firstDataLine: number;
	/** Null for a list of RR intervals, which carries its own time. */
	time: {
		column: number;
		form: TimeForm;
		dateOrder: DateOrder;
		/** Column of the date where `column` holds only the time of day; null otherwise. */
		dateColumn: number | null;
	} | null;
	channels: ChannelColumn[];
	/** Only for `long`: where name and value stand, and which names mean which channel. */
	long: { nameColumn: number; valueColumn: number; names: Record<string, Omit<ChannelColumn, 'column'>> } | null;
}

export interface TableGuess {
	/** Null where no heart rate or no time was recognised; the importer may still map by hand. */
	mapping: TableMapping | null;
	/** Why there is no mapping, or what is doubtful about it. */
	notes: { code: string; message: string }[];
	columnNames: string[];
	/** Cells of the first rows, for the mapping screen. */
	firstRows: string[][];
	/** Further columns that hold a heart rate. */
	otherHeartRates: { column: number; name: string }[];
}
