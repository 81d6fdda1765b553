#!/usr/bin/env node
import { fileURLToPath } from 'node:url';
import { serveJobs } from '../../shared/service/serve-jobs.ts';

// Not by exitCode: nothing may keep a service alive that has stopped.
process.exit(await serveJobs('mosaicker', fileURLToPath(new URL('./thread.ts', import.meta.url))));
