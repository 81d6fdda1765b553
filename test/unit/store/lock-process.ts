import { lockStore } from '../../../shared/store/store-lock.ts';

/** Tries for the lock of a store, says how it went, and keeps the lock until its input ends. */
const [location] = process.argv.slice(2);
let release: (() => Promise<void>) | undefined;
try {
  release = await lockStore(location);
  process.stdout.write('got\n');
} catch (error) {
  process.stdout.write(`${(error as { code?: string }).code}\n`);
}
process.stdin.resume();
process.stdin.on('end', () => void release?.());
