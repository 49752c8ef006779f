import { runServer } from './start.ts';

await runServer(process.env);
