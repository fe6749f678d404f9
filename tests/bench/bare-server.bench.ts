import { createServer } from 'node:http';
import { type AddressInfo } from 'node:net';
import Database from 'better-sqlite3';
import { Server } from 'socket.io';

/** The baseline of what a browser waits for: a socket.io server that commits each message to disk (FULL) and answers it, and nothing else. */
const db = new Database(process.argv[2]);
db.pragma('journal_mode = WAL');
db.pragma('synchronous = FULL');
db.exec('CREATE TABLE kept (id INTEGER PRIMARY KEY, body BLOB NOT NULL)');
const keep = db.prepare<[Buffer]>('INSERT INTO kept (body) VALUES (?)');
const commit = db.transaction((body: Buffer) => keep.run(body));
const server = createServer();
const io = new Server(server, { transports: ['websocket'], perMessageDeflate: false });
io.on('connection', (socket) => {
  socket.on('trigger', ({ packed }: { readonly packed: Buffer }, answer: (kept: boolean) => void) => {
    commit.immediate(packed);
    answer(true);
  });
});
server.listen(0, '127.0.0.1', () => process.send?.(`http://127.0.0.1:${(server.address() as AddressInfo).port}`));
