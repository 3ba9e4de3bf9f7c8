/** `npx tsx src/cli/seed/write-sample.ts [folder]`: writes the sample session's files. */
import { writeSampleFiles } from './sample';

const folder = process.argv[2] ?? 'fixtures/sample-session';
console.log(`${folder}: ${writeSampleFiles(folder).join(', ')}`);
