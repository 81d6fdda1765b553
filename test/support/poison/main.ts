import { fileURLToPath } from 'node:url';
import { serveJobs } from '../../../shared/service/serve-jobs.ts';

process.exit(await serveJobs('worker', fileURLToPath(new URL('./thread.ts', import.meta.url))));
