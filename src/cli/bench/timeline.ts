/** First paint of the timeline against a bare plot of the same samples, in headless Chromium. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { createServer, type Server } from 'node:http';
import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { extname, join, normalize } from 'node:path';
import { fileURLToPath } from 'node:url';
import { chromium, type Browser } from '@playwright/test';
import { DEFAULT_PLAN, DEFAULT_TAG_KINDS } from '../../lib/agreement';
import { simulateSession, type SimulatedSession } from '../../lib/simulate';
import { estimateBestFitShift } from '../../lib/signal';
import type { AlignmentState, SessionDocument, TimelineTrack } from '../../lib/timeline/model';
import { encodeTraceColumns } from '../../lib/timeline/trace-columns';
import { CHROMIUM_FLAGS } from '../local/chromium';
import type { BenchRow } from './row';

const THREE_HOURS_S = 10_800;
const RUNS = 7;
const NAMES = [
	['Halden ECG strap', 'Halden'],
	['Wrenna Loop 2', 'Wrenna'],
	['Ostrel Band', 'Ostrel'],
	['Corvane S', 'Corvane']
] as const;

/** Three hours on the road with a strap and three wearables, one reading a second. */
function threeHourRide(): SimulatedSession {
	const character = { clockOffsetS: 3.42, irregular: false };
	return simulateSession({ seed: 41, activity: 'ride-outdoor', durationS: THREE_HOURS_S, preset: 'typical', wearables: [character, { ...character, clockOffsetS: -1.18 }, { ...character, clockOffsetS: 0.64 }] });
}

function documentOf(session: SimulatedSession): SessionDocument {
	const tracks = NAMES.map(([name, shortName], number): Omit<TimelineTrack, 'traces'> => ({
		recordingId: `recording-${number}`,
		number,
		role: number === 0 ? 'reference' : 'wearable',
		name,
		shortName,
		firmware: 'unknown',
		fileName: `${shortName.toLowerCase()}.fit`,
		warnings: []
	}));
	const alignments = Object.fromEntries(
		session.wearables.map(({ heartRate }, i): [string, AlignmentState] => {
			const estimate = estimateBestFitShift(session.reference.heartRate, heartRate);
			return [`recording-${i + 1}`, { version: 1, offsetS: estimate.bestFitShiftS ?? 0, driftPpm: 0, locked: false, method: 'proposed', estimate }];
		})
	);
	return {
		sessionId: 'bench',
		studyId: 'bench',
		studySlug: 'bench',
		studyTitle: 'Bench',
		code: 'S01',
		title: 'Three hours on the road',
		activity: null,
		participantCode: null,
		state: 'aligned',
		startsAtS: session.startS,
		endsAtS: session.startS + session.durationS,
		tracks,
		alignments,
		tags: [],
		kinds: DEFAULT_TAG_KINDS,
		plan: DEFAULT_PLAN,
		reviews: [],
		can: { align: true, annotate: true, submit: true, review: false, takeBack: false, reopen: false },
		me: { initials: 'RT', role: 'analyst' },
		previousCode: null,
		nextCode: null
	};
}

function samplesOf(session: SimulatedSession): Uint8Array {
	return encodeTraceColumns([
		{ recordingId: 'recording-0', traces: [session.reference.heartRate, ...(session.reference.cadence ? [session.reference.cadence] : [])] },
		...session.wearables.map(({ heartRate, cadence }, i) => ({ recordingId: `recording-${i + 1}`, traces: [heartRate, ...(cadence ? [cadence] : [])] }))
	]);
}

const TYPES: Record<string, string> = { '.html': 'text/html; charset=utf-8', '.js': 'text/javascript', '.css': 'text/css', '.woff2': 'font/woff2', '.json': 'application/json' };

/** Serves the built pages, the document and the samples on loopback. */
async function serve(folder: string, document: SessionDocument, samples: Uint8Array): Promise<{ server: Server; address: string }> {
	const server = createServer((request, response) => {
		const path = new URL(request.url ?? '/', 'http://127.0.0.1').pathname;
		if (path === '/document.json') return void response.setHeader('content-type', TYPES['.json']).end(JSON.stringify(document));
		if (path === '/samples') return void response.setHeader('content-type', 'application/octet-stream').end(samples);
		readFile(join(folder, normalize(path))).then(
			(bytes) => response.setHeader('content-type', TYPES[extname(path)] ?? 'application/octet-stream').end(bytes),
			() => response.writeHead(404).end()
		);
	});
	await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
	const at = server.address();
	if (at === null || typeof at === 'string') throw new Error('The pages could not be served on loopback.');
	return { server, address: `http://127.0.0.1:${at.port}` };
}

/** In a process of its own: the bundler's native parts do not run beside the loader that runs this command. */
async function buildPages(folder: string): Promise<void> {
	const config = fileURLToPath(new URL('timeline-page/vite.config.mjs', import.meta.url));
	const child = spawn(process.execPath, [join('node_modules', 'vite', 'bin', 'vite.js'), 'build', '--config', config, '--outDir', folder], { stdio: ['ignore', 'ignore', 'inherit'] });
	const [status] = await once(child, 'exit');
	if (status !== 0) throw new Error('The pages of the timeline bench could not be built; the words of the build are above.');
}

/** Milliseconds from navigation to the first picture, in a context without anything cached. */
async function firstPaint(browser: Browser, address: string): Promise<number> {
	const context = await browser.newContext({ viewport: { width: 1440, height: 900 } });
	try {
		const page = await context.newPage();
		const faults: string[] = [];
		page.on('pageerror', (fault) => faults.push(fault.message));
		await page.goto(address);
		await page.waitForFunction(() => window.paintedMs !== undefined, undefined, { timeout: 60_000 }).catch(() => {
			throw new Error(`Nothing was painted at ${address}. ${faults.join(' ')}`);
		});
		return (await page.evaluate(() => window.paintedMs)) ?? NaN;
	} finally {
		await context.close();
	}
}

function median(values: number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	return sorted[sorted.length >> 1];
}

/**
 * From navigation to the first picture: the whole timeline page of a three-hour session with four traces, and a bare
 * uPlot of the same heart rates, in turns. Both are built for production and served alike; nothing is cached.
 */
export async function benchTimeline(): Promise<BenchRow[]> {
	const session = threeHourRide();
	const folder = await mkdtemp(join(tmpdir(), 'nonius-bench-'));
	try {
		await buildPages(folder);
		const { server, address } = await serve(folder, documentOf(session), samplesOf(session));
		const browser = await chromium.launch({ executablePath: process.env.NONIUS_CHROMIUM ?? '/usr/bin/chromium', args: CHROMIUM_FLAGS });
		try {
			const ours: number[] = [];
			const rival: number[] = [];
			for (let run = 0; run <= RUNS; run++) {
				const oursMs = await firstPaint(browser, `${address}/ours.html`);
				const rivalMs = await firstPaint(browser, `${address}/rival.html`);
				// The first turn warms both up and is not counted.
				if (run === 0) continue;
				ours.push(oursMs);
				rival.push(rivalMs);
			}
			return [{ name: 'First paint of the timeline, 3 h with four traces', ours_ms: median(ours), rival: 'bare uPlot, same samples', rival_ms: median(rival), ratio: median(ours) / median(rival) }];
		} finally {
			await browser.close();
			await new Promise((resolve) => server.close(resolve));
		}
	} finally {
		await rm(folder, { recursive: true, force: true });
	}
}
