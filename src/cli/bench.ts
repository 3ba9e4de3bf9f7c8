/** `npm run bench [-- --json]`: speed as ratios, each against a named rival in the same run. */
import type { BenchRow } from './bench/row';
import { ensureChromium } from './local/chromium';
import { StopSentence } from './local/sentence';

const SECTIONS: { name: string; load: () => Promise<() => Promise<BenchRow[]>> }[] = [
	{ name: 'Import', load: async () => (await import('./bench/import')).benchImport },
	{ name: 'Alignment', load: async () => (await import('./bench/alignment')).benchAlignment },
	{ name: 'Agreement', load: async () => (await import('./bench/agreement')).benchAgreement },
	{
		name: 'Timeline',
		load: async () => {
			process.env.NONIUS_CHROMIUM = await ensureChromium((words) => console.error(words));
			return (await import('./bench/timeline')).benchTimeline;
		}
	}
];

export async function main(args: string[]): Promise<number> {
	const json = args.includes('--json');
	const unknown = args.filter((a) => a !== '--json');
	if (unknown.length > 0) {
		console.error(`npm run bench knows --json only, not "${unknown[0]}".`);
		return 2;
	}
	const rows: (BenchRow & { section: string })[] = [];
	let status = 0;
	for (const { name, load } of SECTIONS) {
		if (!json) console.log(`\n${name}`);
		try {
			for (const row of await (await load())()) {
				rows.push({ section: name, ...row });
				if (!json) console.log(`  ${row.name.padEnd(62)} ${ms(row.ours_ms)}   ${row.rival.padEnd(34)} ${ms(row.rival_ms)}   ratio ${row.ratio === null ? 'none' : row.ratio.toFixed(2)}`);
			}
		} catch (cause) {
			// What this machine cannot measure does not hide what it can.
			if (!(cause instanceof StopSentence)) throw cause;
			console.error(`${name} was not measured. ${cause.message}`);
			status = 1;
		}
	}
	if (json) console.log(JSON.stringify(rows, null, '\t'));
	return status;
}

const ms = (value: number | null) => (value === null ? '       –' : `${value.toFixed(value < 10 ? 2 : 0)} ms`.padStart(10));
