import { setFlagsFromString } from 'node:v8';

// Import this first. A service that only queues and counts makes much short-lived garbage and keeps little; with
// the default young generation it would hold two hundred megabytes of it.
setFlagsFromString('--semi-space-growth-factor=1');
setFlagsFromString('--max-semi-space-size=8');
