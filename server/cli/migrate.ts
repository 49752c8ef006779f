import { readDataDir } from '../config.ts';
import { openDatabase } from '../database/database.ts';

/** `npm run db:migrate`: brings the database of DATA_DIR to the newest schema. */
const database = await openDatabase(readDataDir(process.env));
await database.close();
process.stdout.write(`${database.file} is at the newest schema.\n`);
