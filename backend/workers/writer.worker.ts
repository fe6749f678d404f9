import { parentPort, workerData } from 'node:worker_threads';
import { serveThread } from '../writer/serve-thread';
import { type ThreadSources } from '../writer/writer-thread';

// The thread of the only writing connection; begun by backend/writer/writer-thread.ts.
if (!parentPort) throw new Error('the writer runs in a thread of the server');
await serveThread(parentPort, workerData as ThreadSources);
