/** The scenario's sessions as the simulator makes them, and their files. */
import { randomStream, simulateSession, type SimulatedSession } from '../../lib/simulate';
import { characters, DEVICES, strapRecording, wearableRecording, writeAnonymously } from './devices';
import { STUDY_ACTIVITIES, WEARERS, type DemoSession } from './scenario';

export interface DemoFile {
	fileName: string;
	bytes: Uint8Array;
	/** 0 is the reference. */
	number: number;
}

export interface SimulatedDemo {
	plan: DemoSession;
	session: SimulatedSession;
	files: DemoFile[];
}

/** Same session, same bytes, on every machine. */
export function simulateDemo(plan: DemoSession): SimulatedDemo {
	const activity = activityOf(plan);
	const wearer = WEARERS.find((w) => w.code === plan.wearer);
	const clocks = randomStream(plan.seed, 'clocks of the scenario');
	// A watch on satellite time, a band on a phone's, a cheap one that is set by hand.
	const offsetsS = [clocks.uniform(1, 5), clocks.uniform(-3, 3), clocks.uniform(-20, 20)].map((o) => Math.round(o * 100) / 100);
	const session = simulateSession({
		seed: plan.seed,
		activity: activity.simulated,
		durationS: plan.minutes * 60,
		startS: Date.parse(`${plan.start}:00Z`) / 1000,
		wearer,
		referenceFault: plan.strapFault ?? false,
		wearables: characters(activity.simulated, offsetsS)
	});
	return { plan, session, files: filesOf(plan, session) };
}

function filesOf(plan: DemoSession, session: SimulatedSession): DemoFile[] {
	const activity = activityOf(plan);
	const day = plan.start.slice(5, 10).replace('-', '');
	const time = plan.start.slice(11).replace(':', '');
	const files: DemoFile[] = [];
	const [strap, ...wearables] = DEVICES;
	if (!plan.withoutReference) files.push({ number: 0, fileName: `halden_${day}_${time}.${strap.extension}`, bytes: strap.write(strapRecording(session, strap.device, activity.inFile)) });
	for (const device of wearables) {
		if (plan.worn && !plan.worn.includes(device.number)) continue;
		const recording = wearableRecording(session.wearables[device.number - 1], device.device, activity.inFile);
		const anonymous = plan.anonymous === device.number;
		files.push({
			number: device.number,
			fileName: anonymous ? 'export(3).csv' : `${device.shortName.toLowerCase()}-${plan.wearer.toLowerCase()}-${activity.stem}-${day}.${device.extension}`,
			bytes: anonymous ? writeAnonymously(recording) : device.write(recording)
		});
	}
	return files;
}

function activityOf(plan: Pick<DemoSession, 'activity'>) {
	const activity = STUDY_ACTIVITIES.find((a) => a.name === plan.activity);
	if (!activity) throw new Error(`${plan.activity} is not an activity of the scenario.`);
	return activity;
}
