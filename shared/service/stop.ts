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
