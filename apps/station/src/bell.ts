/** An event that wakes one waiter; a ring while nobody waits is remembered. */
export class Bell {
  private rung = false;
  private wake: (() => void) | null = null;

  ring(): void {
    this.rung = true;
    this.wake?.();
  }

  /** Waits for the next ring, at most so many milliseconds. */
  async heard(atMostMs: number): Promise<void> {
    if (!this.rung) {
      await new Promise<void>((resolve) => {
        const timer = setTimeout(resolve, atMostMs);
        this.wake = () => {
          clearTimeout(timer);
          resolve();
        };
      });
      this.wake = null;
    }
    this.rung = false;
  }
}
