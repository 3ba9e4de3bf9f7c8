/** Where a wearable's clock stands against the reference's, in versions that are never changed. */
import { sql } from 'drizzle-orm';
import { boolean, check, doublePrecision, foreignKey, integer, jsonb, pgEnum, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { ShiftEstimate } from '../../../signal/shift';
import { createdAt, id } from './columns';
import { recordings } from './recording';
import { members } from './team';

/** How the offset came about: the search's own proposal, put at the peak, or moved by hand. */
export const alignmentMethodEnum = pgEnum('alignment_method', ['proposed', 'peak', 'candidate', 'hand']);

export const alignments = pgTable(
	'alignment',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		recordingId: uuid('recording_id').notNull(),
		version: integer('version').notNull(),
		/** Seconds to add to the wearable's time stamps. */
		offsetS: doublePrecision('offset_s').notNull(),
		driftPpm: doublePrecision('drift_ppm').notNull().default(0),
		method: alignmentMethodEnum('method').notNull(),
		/** A locked offset does not move until it is unlocked. */
		locked: boolean('locked').notNull().default(false),
		/** What the search said at that moment; null when nobody searched. */
		estimate: jsonb('estimate').$type<ShiftEstimate>(),
		note: text('note').notNull().default(''),
		/** Null = the program itself (a proposal). */
		authorId: uuid('author_id'),
		createdAt: createdAt()
	},
	(t) => [
		unique('alignment_version').on(t.recordingId, t.version),
		foreignKey({ columns: [t.teamId, t.recordingId], foreignColumns: [recordings.teamId, recordings.id], name: 'alignment_recording_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.authorId], foreignColumns: [members.teamId, members.id], name: 'alignment_author_same_team' }),
		check('alignment_version_positive', sql`${t.version} >= 1`),
		check('alignment_hand_has_author', sql`${t.method} = 'proposed' or ${t.authorId} is not null`),
		check('alignment_finite', sql`${t.offsetS} between -1e10 and 1e10 and ${t.driftPpm} between -100000 and 100000`)
	]
);
