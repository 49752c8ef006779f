import { startServer } from '../../dist/server/start.js';

// The built server in a process of its own, to be killed; its whole configuration is an argument. It ends with whoever
// started it.
process.stdin.resume().once('end', () => process.exit());
await startServer(JSON.parse(process.argv[2]));
