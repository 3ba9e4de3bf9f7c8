/**
 * What the import asks a person. The sentence stands beside it (`upload.message`); this is what the buttons need.
 *
 * `which-device`   nobody has said yet which device makes files of this origin
 * `device-twice`   the session it belongs to by time already holds a recording of that device
 * `which-session`  it overlaps several sessions about equally
 * `session-closed` the session it belongs to by time is in review or reviewed
 * `clock`          it overlaps nothing as it stands, but its heart rate fits a session whole or half hours away
 */
export type ImportQuestion =
	| { code: 'which-device'; key: string; suggestedModelId: string | null }
	| { code: 'device-twice'; sessionId: string; deviceModelId: string }
	| { code: 'which-session'; sessionIds: string[] }
	| { code: 'session-closed'; sessionId: string }
	| {
			code: 'clock';
			sessionId: string;
			/** Seconds to add to the file's time stamps, whole or half hours. */
			zoneShiftS: number;
			/** Where it then starts, seconds after the reference (negative: before). */
			startsAfterReferenceS: number;
	  };

export type QuestionCode = ImportQuestion['code'];
