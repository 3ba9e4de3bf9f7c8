/** Adds a device to a study from the import page, when a file's device is not among the study's. */
import { and, eq } from 'drizzle-orm';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { deviceModels, studyDevices } from '../db/schema';
import { conflict, invalid } from '../errors';
import { record } from '../record/audit';

export interface NewDevice {
	name: string;
	/** One word for tight columns; by default the first of the name. */
	shortName?: string;
	role: 'reference' | 'wearable';
	placement: (typeof deviceModels.$inferInsert)['placement'];
}

const MOST_WEARABLES = 6;

/** @returns the model's id; the model is the team's of that name where there is one */
export async function addDevice(db: Queryable, actor: Actor, studyId: string, device: NewDevice): Promise<string> {
	authorise(actor, 'study.edit');
	const name = device.name.trim();
	if (name === '' || name.length > 80) throw invalid('Give the device a name of up to 80 letters, as it stands on the device.');
	const shortName = device.shortName?.trim() || name.split(/\s+/)[0];
	return db.transaction(async (tx) => {
		await tx.insert(deviceModels).values({ teamId: actor.teamId, name, shortName, role: device.role, placement: device.placement }).onConflictDoNothing();
		const [model] = await tx
			.select({ id: deviceModels.id, role: deviceModels.role })
			.from(deviceModels)
			.where(and(eq(deviceModels.teamId, actor.teamId), eq(deviceModels.name, name)));
		const taken = await tx.select({ number: studyDevices.number, modelId: studyDevices.deviceModelId }).from(studyDevices).where(eq(studyDevices.studyId, studyId)).for('update');
		if (taken.some((d) => d.modelId === model.id)) throw conflict(`${name} is among this study's devices already. Choose it for the file.`);
		const number = freeNumber(model.role, taken.map((d) => d.number));
		await tx.insert(studyDevices).values({ teamId: actor.teamId, studyId, deviceModelId: model.id, number });
		await record(tx, actor, { action: 'study.device-added', subjectType: 'study', subjectId: studyId, detail: { name, number } });
		return model.id;
	});
}

function freeNumber(role: 'reference' | 'wearable', taken: number[]): number {
	if (role === 'reference') {
		if (taken.includes(0)) throw conflict('This study has its reference already. A second one needs a study of its own.');
		return 0;
	}
	const free = Array.from({ length: MOST_WEARABLES }, (_, i) => i + 1).find((n) => !taken.includes(n));
	if (free === undefined) throw conflict('This study has six wearables already, which is the most. Start another study for this one.');
	return free;
}
