import { afterAll } from 'vitest';
import { closePool } from '../../src/lib/server/db/client.ts';

// Each file has its own instance of the application's pool.
afterAll(closePool);
