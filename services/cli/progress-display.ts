import type { WriteStream } from 'node:tty';
import type { LeftOut } from '../../shared/contract/plan.ts';
import type { RunListener, StageCounts, StageName } from '../coordinator/progress.ts';

interface StageLine {
  readonly name: StageName;
  readonly counts: Readonly<StageCounts>;
}

/** Progress for people: one live line on a terminal, one line for each stage elsewhere. */
export class TextProgress implements RunListener {
  readonly #stream: NodeJS.WriteStream;
  readonly #live: boolean;
  #started = 0;
  #drawn = 0;
  #last: StageLine | undefined;

  constructor(stream: NodeJS.WriteStream) {
    this.#stream = stream;
    this.#live = Boolean((stream as WriteStream).isTTY);
  }

  stage(name: StageName, counts: Readonly<StageCounts>): void {
    this.#finishLine();
    this.#started = performance.now();
    this.#last = { name, counts };
    this.#draw(true);
  }

  settled(name: StageName, counts: Readonly<StageCounts>): void {
    this.#last = { name, counts };
    this.#draw(false);
  }

  leftOut({ kind, id, gap, error }: LeftOut): void {
    this.say(`${gap ? 'set aside' : 'left out'}: ${kind} ${id}: ${error.message}`);
  }

  note(message: string, fields: Readonly<Record<string, unknown>>): void {
    const details = Object.entries(fields).map(([key, value]) => `${key} ${String(value)}`);
    this.say([message, ...details].join(', '));
  }

  say(message: string): void {
    if (this.#live) this.#stream.write('\r\u001b[K');
    this.#stream.write(`${message}\n`);
    if (this.#live && this.#last) this.#draw(true);
  }

  end(): void {
    this.#finishLine();
    this.#last = undefined;
  }

  #draw(force: boolean): void {
    const last = this.#last;
    if (!this.#live || !last) return;
    const now = performance.now();
    if (!force && now - this.#drawn < 100) return;
    this.#drawn = now;
    this.#stream.write(`\r\u001b[K${this.#line(last)}`);
  }

  #finishLine(): void {
    const last = this.#last;
    if (!last) return;
    this.#stream.write(this.#live ? `\r\u001b[K${this.#line(last)}\n` : `${this.#line(last)}\n`);
  }

  #line({ name, counts }: StageLine): string {
    const seconds = (performance.now() - this.#started) / 1000;
    const settled = counts.done + counts.kept + counts.setAside;
    const rate = (counts.done + counts.setAside) / seconds;
    const parts = [`${name.padEnd(10)} ${String(settled).padStart(6)}/${counts.total}`];
    if (counts.kept > 0) parts.push(`${counts.kept} kept`);
    if (counts.setAside > 0) parts.push(`${counts.setAside} set aside`);
    if (counts.done > 0 && Number.isFinite(rate)) parts.push(`${rate.toFixed(rate < 10 ? 1 : 0)}/s`);
    if (settled < counts.total && rate > 0) parts.push(`${clock((counts.total - settled) / rate)} left`);
    else parts.push(clock(seconds));
    return parts.join('  ');
  }
}

function clock(seconds: number): string {
  const whole = Math.round(seconds);
  const two = (value: number) => String(value).padStart(2, '0');
  const [hours, minutes] = [Math.floor(whole / 3600), Math.floor((whole % 3600) / 60)];
  return hours > 0 ? `${hours}:${two(minutes)}:${two(whole % 60)}` : `${minutes}:${two(whole % 60)}`;
}
