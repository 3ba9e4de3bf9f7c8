/** Demo content: the invented scenario, brought in and worked on through the same functions as everybody's. */
import type { Database, Queryable } from '../../lib/server/db/client';
import { workOnSession } from './annotate';
import { importLeftOvers, importSession } from './import-sessions';
import { PEOPLE, SESSIONS, type Person } from './scenario';
import { simulateDemo } from './simulated';
import { makeTeam } from './team';

export { writeSampleFiles } from './sample';

/** Makes the demo content in an empty database, wholly or not at all. */
export async function seedDemo(db: Database): Promise<{ people: Person[] }> {
	await db.transaction((tx) => seedInto(tx));
	return { people: PEOPLE };
}

async function seedInto(db: Queryable): Promise<void> {
	const team = await makeTeam(db);
	for (const plan of SESSIONS) {
		const demo = await importSession(db, team, simulateDemo(plan));
		await workOnSession(db, team, demo);
	}
	await importLeftOvers(db, team, team.actors.RT, simulateDemo(SESSIONS[0]));
}
