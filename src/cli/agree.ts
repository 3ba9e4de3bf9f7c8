/**
 * `nonius agree PAIRS.csv…`: agreement figures of tables of pairs, one JSON line a table.
 *
 * A table has the columns session, reference and wearable; further columns may stand beside them. Differences are
 * wearable − reference, shares are 0 to 1, MAPE is in %. What cannot be determined is null in the line and a sentence on
 * stderr.
 */
import { readFile } from 'node:fs/promises';
import { parseArgs } from 'node:util';
import { bootstrapFigures } from '../lib/agreement/bootstrap';
import { reasonOrNull, valueOrNull } from '../lib/agreement/determinable';
import { agreementFigures, type Figures } from '../lib/agreement/figures';
import { DEFAULT_PLAN, validatePlan, type AnalysisPlan } from '../lib/agreement/plan';
import { readPairsCsv, type ReadGroup } from '../lib/agreement/pairs-csv';
import { sumSession, type ClusterLevel, type SessionSums } from '../lib/agreement/sessions';

const USAGE = `nonius agree PAIRS.csv… [--by activity,device] [--cluster participant,session] [--plan plan.json] [--analysis primary|cleaned]

PAIRS.csv   columns session, reference, wearable, in any order, among others
--by        columns that split the figures, each value a row of "strata"
--cluster   what is independent: session (default), or participant,session; named, bootstrap intervals are added
--plan      analysis plan as JSON; what it leaves out takes the default
--analysis  count only the rows that the column in_primary or in_cleaned marks with 1
`;

interface Choices {
	files: string[];
	by: string[];
	cluster: ClusterLevel;
	plan: AnalysisPlan;
	analysis: 'primary' | 'cleaned' | null;
	/** Resampled intervals are asked for by naming what is independent. */
	resample: boolean;
}

/**
 * Run the command.
 * @param args file names and options, as after `nonius agree`
 * @returns 0 when every table gave figures, 1 when one was refused, 2 when the command itself was not understood
 */
export async function agree(args: string[]): Promise<number> {
	const choices = await choicesFrom(args);
	if (typeof choices === 'string') {
		process.stderr.write(choices.trimEnd() + '\n');
		return args.includes('--help') ? 0 : 2;
	}
	let status = 0;
	for (const file of choices.files) {
		const line = await agreeOnFile(file, choices);
		if ('error' in line) status = 1;
		process.stdout.write(JSON.stringify(line) + '\n');
	}
	return status;
}

/** The choices, or a sentence about what is wrong with them. */
async function choicesFrom(args: string[]): Promise<Choices | string> {
	let parsed;
	try {
		parsed = parseArgs({
			args,
			allowPositionals: true,
			options: {
				by: { type: 'string' },
				cluster: { type: 'string' },
				plan: { type: 'string' },
				analysis: { type: 'string' },
				help: { type: 'boolean' }
			}
		});
	} catch (error) {
		return `${error instanceof Error ? error.message : String(error)}\n\n${USAGE}`;
	}
	const { values, positionals: files } = parsed;
	if (values.help) return USAGE;
	if (files.length === 0) return `Name at least one table of pairs.\n\n${USAGE}`;
	const names = (list: string | undefined) =>
		(list ?? '')
			.split(',')
			.map((name) => name.trim())
			.filter(Boolean);
	const cluster = names(values.cluster).join(',');
	if (!['', 'session', 'participant', 'participant,session'].includes(cluster))
		return `--cluster must be session or participant,session; "${cluster}" is neither.`;
	const { analysis } = values;
	if (analysis !== undefined && analysis !== 'primary' && analysis !== 'cleaned')
		return `--analysis must be primary or cleaned; "${analysis}" is neither.`;
	let plan = DEFAULT_PLAN;
	if (values.plan !== undefined) {
		const read = await readPlan(values.plan);
		if (typeof read === 'string') return read;
		plan = read;
	}
	return {
		files,
		by: names(values.by),
		cluster: cluster.startsWith('participant') ? 'participant' : 'session',
		plan,
		analysis: analysis ?? null,
		resample: cluster !== ''
	};
}

async function readPlan(path: string): Promise<AnalysisPlan | string> {
	let input: unknown;
	try {
		input = JSON.parse(await readFile(path, 'utf8'));
	} catch (error) {
		return error instanceof SyntaxError
			? `The plan ${path} is not valid JSON: ${error.message}.`
			: `The plan ${path} cannot be opened. Check the path.`;
	}
	const result = validatePlan(input);
	return result.ok
		? result.plan
		: [`The plan ${path} cannot be used:`, ...result.problems.map((p) => `  ${p.path}: ${p.message}`)].join('\n');
}

async function agreeOnFile(
	file: string,
	{ by, cluster, plan, analysis, resample }: Choices
): Promise<Record<string, unknown>> {
	let text: string;
	try {
		text = decode(await readFile(file));
	} catch (error) {
		return { file, error: openError(file, error) };
	}
	const read = readPairsCsv(text, {
		by,
		participantColumn: cluster === 'participant' ? 'participant' : undefined,
		onlyWhere: analysis ? `in_${analysis}` : undefined
	});
	if (!read.ok) return { file, error: read.error };
	const say = (message: string) => process.stderr.write(`${file}: ${message}\n`);
	for (const message of read.messages) say(message);
	if (!analysis && read.columns.some((c) => c.toLowerCase() === 'in_primary'))
		say(
			'Every row counts. The table says which rows count in which analysis: use --analysis primary or --analysis cleaned.'
		);
	const options = { cluster, plan };
	const figures = agreementFigures(read.groups, options);
	for (const reason of reasonsOf(figures)) say(reason);
	return {
		file,
		...jsonFigures(figures),
		...(resample ? { bootstrap: jsonBootstrap(read.groups.map(sumSession), cluster, plan) } : {}),
		...(by.length
			? {
					strata: strataOf(read.groups, by).map(({ values, groups }) => ({
						by: values,
						...jsonFigures(agreementFigures(groups, options))
					}))
				}
			: {})
	};
}

function strataOf(groups: ReadGroup[], by: string[]): { values: Record<string, string>; groups: ReadGroup[] }[] {
	const strata = new Map<string, ReadGroup[]>();
	for (const group of groups) {
		const key = JSON.stringify(group.stratum);
		const same = strata.get(key);
		if (same) same.push(group);
		else strata.set(key, [group]);
	}
	return [...strata.values()].map((same) => ({
		values: Object.fromEntries(by.map((name, i) => [name, same[0].stratum[i]])),
		groups: same
	}));
}

/** Percentile and BCa intervals of the cluster bootstrap; null where there are none. */
function jsonBootstrap(sessions: SessionSums[], cluster: ClusterLevel, plan: AnalysisPlan): Record<string, unknown> {
	const { resamples, seed } = plan;
	const intervals = Object.entries(bootstrapFigures(sessions, { resamples, seed, cluster })).map(([figure, result]) => [
		figure,
		'notDeterminable' in result ? null : { percentile: result.percentile, bca: result.bca }
	]);
	return { resamples, seed, ...Object.fromEntries(intervals) };
}

/** Figures as the stable JSON fields: what is not determinable is null. */
export function jsonFigures(f: Figures): Record<string, unknown> {
	const equivalence = 'notDeterminable' in f.equivalence ? null : f.equivalence;
	return {
		n: f.n,
		sessions: f.sessions,
		bias: valueOrNull(f.bias),
		sdNaive: valueOrNull(f.sdNaive),
		loaNaive: valueOrNull(f.loaNaive),
		sd: valueOrNull(f.sd),
		loa: valueOrNull(f.loa),
		mae: valueOrNull(f.mae),
		mape: valueOrNull(f.mape),
		rmse: valueOrNull(f.rmse),
		pearsonR: valueOrNull(f.pearsonR),
		ccc: valueOrNull(f.ccc),
		within5bpm: valueOrNull(f.within5bpm),
		within10pct: valueOrNull(f.within10pct),
		participants: f.participants,
		biasCi95: valueOrNull(f.biasCi95),
		loaLowerCi95: valueOrNull(f.loaLowerCi95),
		loaUpperCi95: valueOrNull(f.loaUpperCi95),
		loaCiMethod: f.loaCiMethod,
		varBetween: valueOrNull(f.varBetween),
		varWithin: valueOrNull(f.varWithin),
		betweenSetToZero: f.betweenSetToZero,
		cccCi95: valueOrNull(f.cccCi95),
		maeCi95: valueOrNull(f.maeCi95),
		mapeCi95: valueOrNull(f.mapeCi95),
		rmseCi95: valueOrNull(f.rmseCi95),
		icc: { '2,1': valueOrNull(f.icc['2,1']), '3,1': valueOrNull(f.icc['3,1']) },
		deming: 'notDeterminable' in f.deming ? null : f.deming,
		proportionalBias: valueOrNull(f.proportionalBias),
		proportionalBiasCi95: valueOrNull(f.proportionalBiasCi95),
		repeatedMeasuresR: valueOrNull(f.repeatedMeasuresR),
		medianAbs: valueOrNull(f.medianAbs),
		p95Abs: valueOrNull(f.p95Abs),
		within5bpmCi95: valueOrNull(f.within5bpmCi95),
		within10pctCi95: valueOrNull(f.within10pctCi95),
		within5pct: valueOrNull(f.within5pct),
		withinEc13: valueOrNull(f.withinEc13),
		withinEc13Ci95: valueOrNull(f.withinEc13Ci95),
		halfRateShare: valueOrNull(f.halfRateShare),
		doubleRateShare: valueOrNull(f.doubleRateShare),
		equivalence,
		coverage: valueOrNull(f.coverage),
		designEffect: valueOrNull(f.designEffect),
		effectiveN: valueOrNull(f.effectiveN)
	};
}

/** Why figures are null, each reason once with the figures that it takes. */
function reasonsOf(f: Figures): string[] {
	const byReason = new Map<string, string[]>();
	const note = (name: string, reason: string | null) => {
		if (reason === null) return;
		const names = byReason.get(reason);
		if (names) names.push(name);
		else byReason.set(reason, [name]);
	};
	for (const name of [
		'bias',
		'sdNaive',
		'sd',
		'loa',
		'mae',
		'mape',
		'rmse',
		'pearsonR',
		'ccc',
		'biasCi95',
		'loaLowerCi95',
		'varBetween',
		'cccCi95',
		'medianAbs'
	] as const)
		note(name, reasonOrNull(f[name]));
	note('deming', 'notDeterminable' in f.deming ? f.deming.notDeterminable : null);
	note('equivalence', 'notDeterminable' in f.equivalence ? f.equivalence.notDeterminable : null);
	return [...byReason].map(([reason, names]) => `Not determinable: ${names.join(', ')}. ${reason}`);
}

function openError(file: string, error: unknown): { code: string; message: string } {
	const code = error instanceof Error && 'code' in error ? String(error.code) : '';
	if (code === 'ENOENT') return { code: 'cannot-open', message: `There is no file ${file}. Check the path.` };
	if (code === 'EISDIR') return { code: 'cannot-open', message: `${file} is a folder. Name the tables in it.` };
	return {
		code: 'cannot-open',
		message: `${file} cannot be opened (${code || (error instanceof Error ? error.message : String(error))}).`
	};
}

/** UTF-8, or UTF-16 where a byte order mark says so. */
function decode(bytes: Uint8Array): string {
	const encoding =
		bytes[0] === 0xff && bytes[1] === 0xfe ? 'utf-16le' : bytes[0] === 0xfe && bytes[1] === 0xff ? 'utf-16be' : 'utf-8';
	return new TextDecoder(encoding).decode(bytes);
}
