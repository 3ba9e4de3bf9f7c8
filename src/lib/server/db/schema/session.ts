/** A session: one bout of exercise with all devices on, on the reference's clock. */
import { sql } from 'drizzle-orm';
import { check, foreignKey, index, pgEnum, pgTable, text, timestamp, unique, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id } from './columns';
import { participants } from './participant';
import { studies } from './study';
import { members } from './team';

/** How far a session has come. `returned` is annotating again, with the reviewer's comment. */
export const sessionStateEnum = pgEnum('session_state', ['imported', 'aligned', 'annotating', 'in review', 'returned', 'reviewed']);

export const sessions = pgTable(
	'session',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		studyId: uuid('study_id').notNull(),
		/** S01, S02, … within the study. */
		code: text('code').notNull(),
		title: text('title').notNull().default(''),
		/** Null until somebody has said it. */
		activity: text('activity'),
		participantId: uuid('participant_id'),
		state: sessionStateEnum('state').notNull().default('imported'),
		annotatorId: uuid('annotator_id'),
		startsAt: timestamp('starts_at', { withTimezone: true }).notNull(),
		endsAt: timestamp('ends_at', { withTimezone: true }).notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('session_code').on(t.studyId, t.code),
		unique('session_team').on(t.teamId, t.id),
		index('session_time').on(t.studyId, t.startsAt),
		index('session_participant').on(t.participantId),
		foreignKey({ columns: [t.teamId, t.studyId], foreignColumns: [studies.teamId, studies.id], name: 'session_study_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.participantId], foreignColumns: [participants.teamId, participants.id], name: 'session_participant_same_team' }),
		foreignKey({ columns: [t.teamId, t.annotatorId], foreignColumns: [members.teamId, members.id], name: 'session_annotator_same_team' }),
		check('session_span', sql`${t.endsAt} >= ${t.startsAt}`),
		check('session_code_form', sql`${t.code} ~ '^S[0-9]{2,5}$'`)
	]
);
