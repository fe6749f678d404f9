import process from 'node:process';

// The development server hands /api on to the server, which listens on PORT.
export default { '/api': { target: `http://127.0.0.1:${process.env.PORT || 4210}`, secure: false } };
