import * as z from 'zod';

// For whoever reads answers by the contract, before it imports a schema: zod would make its checks from text, which the page's content security
// policy forbids and tells in the console.
z.config({ jitless: true });
