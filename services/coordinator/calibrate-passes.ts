import type { Calibration } from '../../shared/contract/calibration.ts';
import type { ErrorCode } from '../../shared/contract/error-table.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { PrepareJob } from '../../shared/contract/jobs.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { PassEvidence } from '../../shared/contract/run-summary.ts';
import { borrowCalibration, calibratePass, mergedSummary, passEvidence } from './calibrate.ts';
import type { RunContext } from './run-context.ts';
import type { StageRunner } from './stage-runner.ts';

/** What ails a pass that another calibration can help. */
const LACKS_ANCHORS: ReadonlySet<ErrorCode> = new Set<ErrorCode>([
  'PASS_NO_ANCHORS',
  'PASS_SPARSE',
  'PASS_CALIBRATION',
]);

/**
 * One calibration for each pass that can have one; the others borrow or are set aside.
 *
 * @param prepared prepare jobs with a result, by pass
 * @throws the first pass's error when no pass can be calibrated
 */
export async function calibratePasses(
  plan: Plan,
  prepared: ReadonlyMap<number, readonly PrepareJob[]>,
  { store, listener, signal }: RunContext,
  runner: StageRunner,
): Promise<{ calibrations: Map<number, Calibration>; evidence: PassEvidence[] }> {
  const counts = { total: plan.passes.length, done: 0, kept: 0, setAside: 0 };
  runner.counts.set('calibrate', counts);
  listener.stage('calibrate', counts);
  const evidence: PassEvidence[] = [];
  const own = new Map<number, Calibration>();
  const failed: { pass: number; error: BasinloomError }[] = [];
  for (const [pass, jobs] of prepared) {
    signal.throwIfAborted();
    let seen: PassEvidence | undefined;
    try {
      const keys = jobs.map((job) => job.summaryKey);
      const summary = await mergedSummary(keys, store);
      seen = passEvidence(plan.passes[pass].pass.id, summary);
      const found = calibratePass(plan, pass, summary);
      own.set(pass, found.calibration);
      seen = found.evidence;
    } catch (error) {
      failed.push({ pass, error: BasinloomError.from(error) });
    }
    if (seen) evidence.push(seen);
    counts.done = own.size;
    listener.settled('calibrate', counts);
  }
  const calibrations = new Map(own);
  for (const { pass, error } of failed) {
    const borrowed = borrow(plan, pass, error, own);
    const { id } = plan.passes[pass].pass;
    if (borrowed) {
      calibrations.set(pass, borrowed);
      counts.done++;
      listener.note('calibration borrowed', { pass: id, from: borrowed.borrowedFrom, because: error.message });
    } else {
      counts.setAside++;
      runner.setAside({ kind: 'pass', id, gap: error.code !== 'PASS_ALL_CLOUD', error: error.toRecord() });
    }
  }
  if (calibrations.size === 0) {
    throw failed[0]?.error ?? new BasinloomError('INTERNAL', { detail: 'no pass was prepared' });
  }
  listener.settled('calibrate', counts);
  return { calibrations, evidence };
}

function borrow(
  plan: Plan,
  pass: number,
  error: BasinloomError,
  own: ReadonlyMap<number, Calibration>,
): Calibration | null {
  if (!LACKS_ANCHORS.has(error.code) || plan.basin.method.anchors.onFailure !== 'borrow') return null;
  const lenders = [...own].map(([other, calibration]) => ({ pass: other, calibration }));
  return borrowCalibration(plan, pass, lenders);
}
