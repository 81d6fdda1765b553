import { kernelBench } from './kernel.ts';
import { queueBench } from './queue.ts';
import { runBench } from './run.ts';

/** `npm run bench`: speed as ratios against yardsticks run in this call; `-- --json` prints them for machines. */
const results = [await kernelBench(), await queueBench(), await runBench()];
const ratios = Object.assign({}, ...results.map((result) => result.ratios)) as Record<string, number>;
const notes = results.flatMap((result) => result.notes);
if (process.argv.includes('--json')) {
  process.stdout.write(`${JSON.stringify({ ratios, notes })}\n`);
} else {
  for (const [name, ratio] of Object.entries(ratios)) process.stdout.write(`${name.padEnd(20)} ${ratio.toFixed(2)}\n`);
  process.stdout.write(`\n${notes.join('\n')}\n`);
}
