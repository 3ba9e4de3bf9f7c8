/** A study: the question, its devices in order, and its analysis plan in versions. */
import { sql } from 'drizzle-orm';
import { check, foreignKey, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { AnalysisPlan } from '../../../agreement/plan';
import { users } from './auth';
import { createdAt, id } from './columns';
import { deviceModels } from './device';
import { teams } from './team';

export const studies = pgTable(
	'study',
	{
		id: id(),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		slug: text('slug').notNull(),
		title: text('title').notNull(),
		question: text('question').notNull().default(''),
		/** Activities in the order in which tables show them. */
		activities: jsonb('activities').$type<string[]>().notNull().default([]),
		createdBy: text('created_by').references(() => users.id, { onDelete: 'set null' }),
		createdAt: createdAt()
	},
	(t) => [
		unique('study_slug').on(t.teamId, t.slug),
		unique('study_team').on(t.teamId, t.id),
		check('study_slug_form', sql`${t.slug} ~ '^[a-z0-9]+(-[a-z0-9]+)*$'`)
	]
);

/** Devices of a study. Number 0 is the reference; 1 to 6 are the wearables, fixed for the whole study (notches, key, colour). */
export const studyDevices = pgTable(
	'study_device',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		studyId: uuid('study_id').notNull(),
		deviceModelId: uuid('device_model_id').notNull(),
		number: integer('number').notNull()
	},
	(t) => [
		unique('study_device_number').on(t.studyId, t.number),
		unique('study_device_once').on(t.studyId, t.deviceModelId),
		foreignKey({ columns: [t.teamId, t.studyId], foreignColumns: [studies.teamId, studies.id], name: 'study_device_study_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.deviceModelId], foreignColumns: [deviceModels.teamId, deviceModels.id], name: 'study_device_model_same_team' }),
		check('study_device_number_range', sql`${t.number} between 0 and 6`)
	]
);

/** Analysis plans are never changed: an amendment is a new version. */
export const analysisPlans = pgTable(
	'analysis_plan',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		studyId: uuid('study_id').notNull(),
		version: integer('version').notNull(),
		body: jsonb('body').$type<AnalysisPlan>().notNull(),
		reason: text('reason').notNull().default(''),
		createdBy: text('created_by').references(() => users.id, { onDelete: 'set null' }),
		createdAt: createdAt()
	},
	(t) => [
		unique('analysis_plan_version').on(t.studyId, t.version),
		foreignKey({ columns: [t.teamId, t.studyId], foreignColumns: [studies.teamId, studies.id], name: 'analysis_plan_study_same_team' }).onDelete('cascade'),
		check('analysis_plan_version_positive', sql`${t.version} >= 1`)
	]
);
