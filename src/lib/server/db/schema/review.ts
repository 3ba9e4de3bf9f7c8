/** Rounds of review: who handed a session in, who decided what. */
import { sql } from 'drizzle-orm';
import { check, foreignKey, integer, pgEnum, pgTable, text, timestamp, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id } from './columns';
import { sessions } from './session';
import { members } from './team';

export const decisionEnum = pgEnum('review_decision', ['approved', 'returned']);

export const reviews = pgTable(
	'review',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		sessionId: uuid('session_id').notNull(),
		round: integer('round').notNull(),
		submittedBy: uuid('submitted_by').notNull(),
		submittedAt: createdAt(),
		submitNote: text('submit_note').notNull().default(''),
		reviewerId: uuid('reviewer_id'),
		decision: decisionEnum('decision'),
		comment: text('comment').notNull().default(''),
		decidedAt: timestamp('decided_at', { withTimezone: true }),
		/** Set when it was taken back before anybody decided; the round stays in the record. */
		takenBackAt: timestamp('taken_back_at', { withTimezone: true })
	},
	(t) => [
		unique('review_round').on(t.sessionId, t.round),
		uniqueIndex('review_one_open').on(t.sessionId).where(sql`${t.decision} is null and ${t.takenBackAt} is null`),
		foreignKey({ columns: [t.teamId, t.sessionId], foreignColumns: [sessions.teamId, sessions.id], name: 'review_session_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.submittedBy], foreignColumns: [members.teamId, members.id], name: 'review_submitter_same_team' }),
		foreignKey({ columns: [t.teamId, t.reviewerId], foreignColumns: [members.teamId, members.id], name: 'review_reviewer_same_team' }),
		check('review_not_own_work', sql`${t.reviewerId} is null or ${t.reviewerId} <> ${t.submittedBy}`),
		check('review_decided_whole', sql`(${t.decision} is null) = (${t.decidedAt} is null) and (${t.decision} is null or ${t.reviewerId} is not null)`),
		check('review_taken_back_undecided', sql`${t.takenBackAt} is null or ${t.decision} is null`),
		check('review_return_says_why', sql`${t.decision} is distinct from 'returned' or length(btrim(${t.comment})) > 0`)
	]
);
