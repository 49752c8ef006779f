import { startServer } from '../../server/start.ts';
import { testConfig } from './test-server.ts';

/** A server in a process of its own, to be killed: data folder and port are arguments. */
const [dataDir, port] = process.argv.slice(2);
await startServer({ ...testConfig, dataDir, port: Number(port), baseUrl: `http://127.0.0.1:${port}` });
