/**
 * Names of the activity numbers that occur in files from exercise tests; others are kept by number.
 *
 * @see FIT profile, type `sport` (published by the format's owner; from memory)
 */
const SPORTS: Record<number, string> = {
	0: 'generic',
	1: 'running',
	2: 'cycling',
	3: 'transition',
	4: 'fitness equipment',
	5: 'swimming',
	10: 'training',
	11: 'walking',
	12: 'cross-country skiing',
	13: 'alpine skiing',
	15: 'rowing',
	16: 'mountaineering',
	17: 'hiking',
	18: 'multisport',
	19: 'paddling',
	21: 'e-biking',
	30: 'inline skating',
	31: 'rock climbing',
	33: 'ice skating',
	35: 'snowshoeing',
	37: 'stand-up paddling',
	62: 'high-intensity interval training'
};

/** Name of a sport number, `sport 47` where it has none here. */
export function sportName(number: number): string {
	return SPORTS[number] ?? `sport ${number}`;
}

/** Number of a sport name as written by `writeFit`, 0 (generic) where it has none here. */
export function sportNumber(name: string | null): number {
	const wanted = (name ?? '').toLowerCase();
	const found = Object.entries(SPORTS).find(([, known]) => known === wanted);
	if (found) return Number(found[0]);
	if (/run|jog/.test(wanted)) return 1;
	if (/cycl|bik|ride/.test(wanted)) return 2;
	if (/walk/.test(wanted)) return 11;
	if (/row/.test(wanted)) return 15;
	if (/swim/.test(wanted)) return 5;
	return wanted ? 10 : 0;
}
