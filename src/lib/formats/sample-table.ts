/**
 * Rows as a file gives them: one time stamp each, in file order, and a column per channel.
 *
 * Columns are typed arrays that grow by doubling, so that a long file costs no object per row.
 * An empty cell is NaN.
 */
export class SampleTable {
	/** Number of rows. */
	n = 0;
	/** Epoch seconds; NaN for a row that carries no time stamp. Only the first `n` entries count. */
	tS: Float64Array;
	private readonly columns = new Map<string, Float64Array>();

	constructor(capacity = 1024) {
		this.tS = new Float64Array(capacity);
	}

	/** Starts a row and gives its index. */
	addRow(tS: number): number {
		if (this.n === this.tS.length) this.grow();
		this.tS[this.n] = tS;
		return this.n++;
	}

	/** Writes one cell; the column appears with its first value. */
	set(row: number, name: string, value: number): void {
		let column = this.columns.get(name);
		if (!column) {
			column = new Float64Array(this.tS.length).fill(NaN);
			this.columns.set(name, column);
		}
		column[row] = value;
	}

	/** Value of a cell, NaN where it is empty. */
	get(row: number, name: string): number {
		return this.columns.get(name)?.[row] ?? NaN;
	}

	/** The first `n` entries of a column, as a view, or undefined. */
	column(name: string): Float64Array | undefined {
		return this.columns.get(name)?.subarray(0, this.n);
	}

	names(): string[] {
		return [...this.columns.keys()];
	}

	/** True where the column holds at least one value other than empty and 0. */
	holds(name: string): boolean {
		return this.column(name)?.some((value) => value === value && value !== 0) ?? false;
	}

	/** Gives a column another name; an older column of that name is replaced. */
	rename(name: string, to: string): void {
		const column = this.columns.get(name);
		if (!column) return;
		this.columns.delete(name);
		this.columns.set(to, column);
	}

	drop(name: string): void {
		this.columns.delete(name);
	}

	private grow(): void {
		const capacity = this.tS.length * 2;
		const tS = new Float64Array(capacity);
		tS.set(this.tS);
		this.tS = tS;
		for (const [name, old] of this.columns) {
			const column = new Float64Array(capacity);
			column.set(old);
			column.fill(NaN, old.length);
			this.columns.set(name, column);
		}
	}
}
