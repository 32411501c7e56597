/** Whether there is a process of this number. */
export function isRunning(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    // it is there, and another user's
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}
