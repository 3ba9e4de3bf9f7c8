/** Which device made a file: the remembered answer, the unit, the suggestion. */
import { and, eq, isNull } from 'drizzle-orm';
import type { RecordedDevice } from '../../formats/recording';
import type { Queryable } from '../db/client';
import { deviceModels, deviceRules, deviceUnits, studyDevices } from '../db/schema';

export interface StudyDevice {
	modelId: string;
	/** 0 is the reference, 1 to 6 the wearables. */
	number: number;
	name: string;
	shortName: string;
	role: 'reference' | 'wearable';
}

export async function devicesOfStudy(db: Queryable, teamId: string, studyId: string): Promise<StudyDevice[]> {
	return db
		.select({ modelId: deviceModels.id, number: studyDevices.number, name: deviceModels.name, shortName: deviceModels.shortName, role: deviceModels.role })
		.from(studyDevices)
		.innerJoin(deviceModels, eq(deviceModels.id, studyDevices.deviceModelId))
		.where(and(eq(studyDevices.teamId, teamId), eq(studyDevices.studyId, studyId)))
		.orderBy(studyDevices.number);
}

/** The model that was once answered for this key, or null. */
export async function rememberedModel(db: Queryable, teamId: string, key: string): Promise<string | null> {
	const [rule] = await db
		.select({ modelId: deviceRules.deviceModelId })
		.from(deviceRules)
		.where(and(eq(deviceRules.teamId, teamId), eq(deviceRules.key, key)));
	return rule?.modelId ?? null;
}

/** Remembers an answer. `overrule` replaces an earlier one; without it the earlier one stands. */
export async function rememberModel(db: Queryable, teamId: string, key: string, deviceModelId: string, overrule: boolean): Promise<void> {
	const rule = db.insert(deviceRules).values({ teamId, key, deviceModelId });
	if (overrule) await rule.onConflictDoUpdate({ target: [deviceRules.teamId, deviceRules.key], set: { deviceModelId } });
	else await rule.onConflictDoNothing();
}

/** The unit with this serial number and firmware, made where it is new. */
export async function unitOf(db: Queryable, teamId: string, deviceModelId: string, device: RecordedDevice): Promise<string> {
	const firmware = device.firmware ?? 'unknown';
	const [added] = await db.insert(deviceUnits).values({ teamId, deviceModelId, serial: device.serial, firmware }).onConflictDoNothing().returning({ id: deviceUnits.id });
	if (added) return added.id;
	const [there] = await db
		.select({ id: deviceUnits.id })
		.from(deviceUnits)
		.where(
			and(
				eq(deviceUnits.teamId, teamId),
				eq(deviceUnits.deviceModelId, deviceModelId),
				device.serial === null ? isNull(deviceUnits.serial) : eq(deviceUnits.serial, device.serial),
				eq(deviceUnits.firmware, firmware)
			)
		);
	return there.id;
}
