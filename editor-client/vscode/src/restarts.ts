const MOST = 3;
const WITHIN_MS = 3 * 60_000;

/** How often a server that ended by itself is started again: three times in three minutes. */
export class Restarts {
  private times: number[] = [];

  /** Whether there may be one more now, which then counts. */
  allowed(now: number): boolean {
    this.times = this.times.filter((time) => now - time < WITHIN_MS);
    if (this.times.length >= MOST) return false;
    this.times.push(now);
    return true;
  }
}
