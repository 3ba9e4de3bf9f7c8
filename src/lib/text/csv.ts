/** One cell of a CSV file (RFC 4180), and safe to open in a spreadsheet: text that starts like a formula is quoted as text. */
export function csvCell(value: string): string {
	const safe = /^[=+\-@\t\r]/.test(value) && !/^[+-]?\d+(\.\d+)?$/.test(value) ? `'${value}` : value;
	return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
