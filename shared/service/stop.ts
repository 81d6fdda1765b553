/** Resolves at the first SIGTERM or SIGINT; a second one ends the process at once. */
export function stopRequested(): Promise<NodeJS.Signals> {
  return new Promise((resolve) => {
    let asked = false;
    const stop = (name: NodeJS.Signals) => {
      if (asked) process.exit(1);
      asked = true;
      resolve(name);
    };
    process.on('SIGTERM', stop);
    process.on('SIGINT', stop);
  });
}

/** Waits for work, but not for longer than a deadline. @returns whether the work was done */
export async function within(work: Promise<unknown>, deadlineMs: number): Promise<boolean> {
  let timer: NodeJS.Timeout | undefined;
  const late = new Promise<false>((resolve) => {
    timer = setTimeout(resolve, deadlineMs, false);
  });
  const done = await Promise.race([work.then(() => true), late]);
  clearTimeout(timer);
  return done;
}
