import process from 'node:process';

// The development server hands /api and the socket of browsers on to the server, which listens on PORT.
const target = `http://127.0.0.1:${process.env.PORT || 4210}`;

export default { '/api': { target, secure: false }, '/live': { target, secure: false, ws: true } };
