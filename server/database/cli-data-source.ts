import { readDataDir } from '../config.ts';
import { makeWriteSource } from './data-source.ts';
import { databaseFile } from './database.ts';

/** For TypeORM's own command line (migration:generate and the like). */
export default makeWriteSource(databaseFile(readDataDir(process.env)));
