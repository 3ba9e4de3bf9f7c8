/** Files as they came, what was read from them, and the samples. */
import { sql } from 'drizzle-orm';
import { bigint, check, doublePrecision, foreignKey, index, integer, jsonb, pgEnum, pgTable, text, timestamp, unique, uuid } from 'drizzle-orm/pg-core';
import type { ReadingWarning, RecordedDevice } from '../../../formats/recording';
import type { ImportQuestion } from '../../../import/question';
import { bytea, createdAt, float64Column, id } from './columns';
import { deviceModels, deviceUnits } from './device';
import { sessions } from './session';
import { studies } from './study';
import { members, teams } from './team';

/** The bytes as uploaded. The same bytes are kept once per team. */
export const rawFiles = pgTable(
	'raw_file',
	{
		id: id(),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		sha256: text('sha256').notNull(),
		sizeBytes: bigint('size_bytes', { mode: 'number' }).notNull(),
		bytes: bytea('bytes').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('raw_file_once').on(t.teamId, t.sha256),
		unique('raw_file_team').on(t.teamId, t.id),
		check('raw_file_hash', sql`${t.sha256} ~ '^[0-9a-f]{64}$'`),
		check('raw_file_size', sql`${t.sizeBytes} = octet_length(${t.bytes})`)
	]
);

/**
 * One uploaded file on its way in. `waiting` and `reading` are the worker's; `asking` needs an answer (which device);
 * `ready` has its device and a place among the sessions; `filed` is a recording in a session; `refused` says why.
 */
export const uploadStateEnum = pgEnum('upload_state', ['waiting', 'reading', 'asking', 'ready', 'filed', 'refused']);

export const uploads = pgTable(
	'upload',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		studyId: uuid('study_id').notNull(),
		uploadedBy: uuid('uploaded_by').notNull(),
		fileName: text('file_name').notNull(),
		/** Null once a refused file's bytes are gone. */
		rawFileId: uuid('raw_file_id'),
		state: uploadStateEnum('state').notNull().default('waiting'),
		/** Share of the reading done, 0 to 1. */
		progress: doublePrecision('progress').notNull().default(0),
		/** A stable code and the sentence shown: why it is refused, what is asked, or where it was put and why. */
		messageCode: text('message_code'),
		message: text('message'),
		/** For `asking`: what the buttons need. */
		question: jsonb('question').$type<ImportQuestion>(),
		recordingId: uuid('recording_id'),
		createdAt: createdAt(),
		finishedAt: timestamp('finished_at', { withTimezone: true })
	},
	(t) => [
		index('upload_study').on(t.studyId, t.state),
		foreignKey({ columns: [t.teamId, t.studyId], foreignColumns: [studies.teamId, studies.id], name: 'upload_study_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.uploadedBy], foreignColumns: [members.teamId, members.id], name: 'upload_member_same_team' }),
		foreignKey({ columns: [t.teamId, t.rawFileId], foreignColumns: [rawFiles.teamId, rawFiles.id], name: 'upload_raw_same_team' }),
		foreignKey({ columns: [t.recordingId], foreignColumns: [recordings.id], name: 'upload_recording' }).onDelete('set null'),
		check('upload_progress', sql`${t.progress} between 0 and 1`),
		check('upload_refused_says_why', sql`${t.state} <> 'refused' or ${t.message} is not null`),
		check('upload_asks_something', sql`(${t.state} = 'asking') = (${t.question} is not null)`)
	]
);

/** One device's file of one session, as it was read. */
export const recordings = pgTable(
	'recording',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		studyId: uuid('study_id').notNull(),
		/** Null until it has a session. */
		sessionId: uuid('session_id'),
		rawFileId: uuid('raw_file_id').notNull(),
		fileName: text('file_name').notNull(),
		/** Null until the device is known. */
		deviceModelId: uuid('device_model_id'),
		deviceUnitId: uuid('device_unit_id'),
		format: text('format').notNull(),
		readerVersion: text('reader_version').notNull(),
		device: jsonb('device').$type<RecordedDevice>().notNull(),
		activity: text('activity'),
		warnings: jsonb('warnings').$type<ReadingWarning[]>().notNull().default([]),
		/** Epoch seconds on the device's own clock. */
		startS: doublePrecision('start_s').notNull(),
		endS: doublePrecision('end_s').notNull(),
		uploadedBy: uuid('uploaded_by').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('recording_raw_once').on(t.studyId, t.rawFileId),
		unique('recording_team').on(t.teamId, t.id),
		unique('recording_device_once').on(t.sessionId, t.deviceModelId),
		index('recording_session').on(t.sessionId),
		foreignKey({ columns: [t.teamId, t.studyId], foreignColumns: [studies.teamId, studies.id], name: 'recording_study_same_team' }).onDelete('cascade'),
		foreignKey({ columns: [t.teamId, t.sessionId], foreignColumns: [sessions.teamId, sessions.id], name: 'recording_session_same_team' }),
		foreignKey({ columns: [t.teamId, t.rawFileId], foreignColumns: [rawFiles.teamId, rawFiles.id], name: 'recording_raw_same_team' }),
		foreignKey({ columns: [t.teamId, t.deviceModelId], foreignColumns: [deviceModels.teamId, deviceModels.id], name: 'recording_model_same_team' }),
		foreignKey({ columns: [t.teamId, t.deviceUnitId], foreignColumns: [deviceUnits.teamId, deviceUnits.id], name: 'recording_unit_same_team' }),
		foreignKey({ columns: [t.teamId, t.uploadedBy], foreignColumns: [members.teamId, members.id], name: 'recording_member_same_team' }),
		check('recording_span', sql`${t.endS} >= ${t.startS}`)
	]
);

/** Samples of one channel, two columns of float64 of equal length. */
export const traces = pgTable(
	'trace',
	{
		id: id(),
		recordingId: uuid('recording_id')
			.notNull()
			.references(() => recordings.id, { onDelete: 'cascade' }),
		kind: text('kind').notNull(),
		n: integer('n').notNull(),
		tS: float64Column('t_s').notNull(),
		value: float64Column('value').notNull()
	},
	(t) => [
		unique('trace_kind').on(t.recordingId, t.kind),
		check('trace_kind_known', sql`${t.kind} in ('heartRate', 'rrInterval', 'cadence', 'speed', 'power', 'altitude', 'distance', 'temperature')`),
		check('trace_lengths', sql`octet_length(${t.tS}) = 8 * ${t.n} and octet_length(${t.value}) = 8 * ${t.n} and ${t.n} > 0`)
	]
);
