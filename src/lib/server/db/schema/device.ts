/** Device models, the units a team owns, and how files are recognised as theirs. */
import { sql } from 'drizzle-orm';
import { check, foreignKey, index, pgEnum, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id } from './columns';
import { teams } from './team';

/** `reference` is the criterion (the strap); `wearable` is a device under test. */
export const deviceRoleEnum = pgEnum('device_role', ['reference', 'wearable']);
export const placementEnum = pgEnum('placement', ['chest', 'wrist', 'forearm', 'upper arm', 'finger', 'ear', 'other']);

export const deviceModels = pgTable(
	'device_model',
	{
		id: id(),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		name: text('name').notNull(),
		/** One word for tight columns. */
		shortName: text('short_name').notNull(),
		role: deviceRoleEnum('role').notNull(),
		placement: placementEnum('placement').notNull(),
		createdAt: createdAt()
	},
	(t) => [unique('device_model_name').on(t.teamId, t.name), unique('device_model_team').on(t.teamId, t.id)]
);

export const deviceUnits = pgTable(
	'device_unit',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		deviceModelId: uuid('device_model_id').notNull(),
		serial: text('serial'),
		/** Software version; a unit after an update is a further row, so that figures are never mixed unseen. */
		firmware: text('firmware').notNull().default('unknown'),
		createdAt: createdAt()
	},
	(t) => [
		foreignKey({ columns: [t.teamId, t.deviceModelId], foreignColumns: [deviceModels.teamId, deviceModels.id], name: 'device_unit_model_same_team' }).onDelete('cascade'),
		unique('device_unit_firmware').on(t.teamId, t.deviceModelId, t.serial, t.firmware).nullsNotDistinct(),
		unique('device_unit_team').on(t.teamId, t.id)
	]
);

/** The answer to 'which device made this file', remembered by serial number or by the file's origin. */
export const deviceRules = pgTable(
	'device_rule',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		/** `serial:…` or `origin:…` */
		key: text('key').notNull(),
		deviceModelId: uuid('device_model_id').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('device_rule_key').on(t.teamId, t.key),
		index('device_rule_model').on(t.deviceModelId),
		foreignKey({ columns: [t.teamId, t.deviceModelId], foreignColumns: [deviceModels.teamId, deviceModels.id], name: 'device_rule_model_same_team' }).onDelete('cascade'),
		check('device_rule_key_form', sql`${t.key} ~ '^(serial|origin):.'`)
	]
);
