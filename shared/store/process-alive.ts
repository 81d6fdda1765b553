/** True when a process of this machine runs, under whatever user. */
export function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    // EPERM: it lives, under another user.
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}
