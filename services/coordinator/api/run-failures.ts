import type { LeftOut } from '../../../shared/contract/plan.ts';
import { findJson } from '../../../shared/store/artefact-reader.ts';
import type { Store } from '../../../shared/store/store.ts';
import type { RunRecord } from '../run-record.ts';
import type { Failures } from './schemas.ts';
import { jobPath, jobStatusOf } from './status-info.ts';

/** What a run has set aside: from its failures.json, or from its events while it is on its way. */
export async function failuresOf(record: RunRecord, store: Store): Promise<Failures> {
  const { failures, notes } = record.state === 'running' ? await soFar(record, store) : await atTheEnd(record, store);
  const self = jobPath(record.id);
  return {
    jobID: record.id,
    status: jobStatusOf(record),
    failures: failures.map(shown),
    notes: notes.map(shown),
    links: [
      { href: `${self}/failures`, rel: 'self', type: 'application/json' },
      { href: self, rel: 'up', type: 'application/json', title: 'the run' },
    ],
  };
}

interface Sorted {
  readonly failures: readonly LeftOut[];
  readonly notes: readonly LeftOut[];
}

async function atTheEnd({ id }: RunRecord, store: Store): Promise<Sorted> {
  // A run that failed before it could leave the file has set nothing aside.
  return (await findJson<Sorted>(store, `runs/${id}/failures.json`)) ?? { failures: [], notes: [] };
}

async function soFar({ id }: RunRecord, store: Store): Promise<Sorted> {
  const bytes = await store.get(`runs/${id}/events.ndjson`);
  const found = new Map<string, LeftOut>();
  for (const line of Buffer.from(bytes ?? [])
    .toString('utf8')
    .split('\n')) {
    const event = parsed(line);
    // A run that goes on under its id after a stop counts anew.
    if (event?.event === 'end') found.clear();
    if (event?.event === 'left-out') found.set(`${event.kind} ${event.id}`, event);
  }
  const all = [...found.values()];
  return { failures: all.filter(({ gap }) => gap), notes: all.filter(({ gap }) => !gap) };
}

/** A line of the log; null for one that a crash has cut. */
function parsed(line: string): (LeftOut & { readonly event: string }) | null {
  try {
    return JSON.parse(line);
  } catch {
    return null;
  }
}

function shown({ kind, id, gap, error }: LeftOut): Failures['failures'][number] {
  const { code, message, remedy, retryable, parameters } = error;
  return { kind, id, gap, error: { code, message, remedy, retryable, parameters: { ...parameters } } };
}
