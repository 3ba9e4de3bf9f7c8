/** Tags, each in versions that are never changed, and the set of kinds as data. */
import { sql } from 'drizzle-orm';
import { boolean, check, doublePrecision, foreignKey, index, integer, pgEnum, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id } from './columns';
import { recordings } from './recording';
import { sessions } from './session';
import { members, teams } from './team';

export const treatmentEnum = pgEnum('tag_treatment', ['in', 'out']);
export const blameEnum = pgEnum('tag_blame', ['reference', 'wearable', 'neither']);
export const tagStatusEnum = pgEnum('tag_status', ['proposed', 'accepted', 'crossed out', 'removed']);

/** Kinds belong to a team, so that teams can add their own. */
export const tagKinds = pgTable(
	'tag_kind',
	{
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		key: text('key').notNull(),
		name: text('name').notNull(),
		hotkey: text('hotkey'),
		texture: text('texture').notNull(),
		blames: blameEnum('blames').notNull(),
		primary: treatmentEnum('primary_treatment').notNull(),
		cleaned: treatmentEnum('cleaned_treatment').notNull(),
		meaning: text('meaning').notNull(),
		position: integer('position').notNull()
	},
	(t) => [
		primaryKey({ columns: [t.teamId, t.key] }),
		unique('tag_kind_hotkey').on(t.teamId, t.hotkey),
		check('tag_kind_key_form', sql`${t.key} ~ '^[a-z0-9]+(-[a-z0-9]+)*$'`),
		check('tag_kind_primary_only_reference', sql`${t.primary} = 'in' or ${t.blames} = 'reference'`)
	]
);

/** A tag's lasting identity; what it says stands in its versions. */
export const annotations = pgTable(
	'annotation',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		sessionId: uuid('session_id').notNull(),
		recordingId: uuid('recording_id').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('annotation_team').on(t.teamId, t.id),
		index('annotation_session').on(t.sessionId),
		index('annotation_recording').on(t.recordingId),
		foreignKey({ columns: [t.teamId, t.sessionId], foreignColumns: [sessions.teamId, sessions.id], name: 'annotation_session_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.recordingId], foreignColumns: [recordings.teamId, recordings.id], name: 'annotation_recording_same_team' }).onDelete('cascade')
	]
);

export const annotationVersions = pgTable(
	'annotation_version',
	{
		teamId: uuid('team_id').notNull(),
		annotationId: uuid('annotation_id').notNull(),
		version: integer('version').notNull(),
		kind: text('kind').notNull(),
		/** [start, end) in epoch seconds on the recording's own clock: the tag moves with the samples. */
		startS: doublePrecision('start_s').notNull(),
		endS: doublePrecision('end_s').notNull(),
		status: tagStatusEnum('status').notNull(),
		/** Set when this one tag goes in or out of the cleaned analysis against the plan's rule. */
		cleanedOverride: treatmentEnum('cleaned_override'),
		/** The detector's evidence for a proposal, or the analyst's note. */
		evidence: text('evidence').notNull().default(''),
		note: text('note').notNull().default(''),
		/** Null = proposed by the program. */
		authorId: uuid('author_id'),
		byProgram: boolean('by_program').notNull().default(false),
		createdAt: createdAt()
	},
	(t) => [
		primaryKey({ columns: [t.annotationId, t.version] }),
		foreignKey({ columns: [t.teamId, t.annotationId], foreignColumns: [annotations.teamId, annotations.id], name: 'annotation_version_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.kind], foreignColumns: [tagKinds.teamId, tagKinds.key], name: 'annotation_version_kind' }),
		foreignKey({ columns: [t.teamId, t.authorId], foreignColumns: [members.teamId, members.id], name: 'annotation_version_author_same_team' }),
		check('annotation_version_span', sql`${t.endS} > ${t.startS}`),
		check('annotation_version_positive', sql`${t.version} >= 1`),
		check('annotation_version_has_author', sql`${t.byProgram} or ${t.authorId} is not null`)
	]
);
