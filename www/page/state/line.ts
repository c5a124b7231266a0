/** A line in front of one worker: at most one request in flight, and of each sort only the newest waits. */

/** What a line needs of the bridge. */
export interface Desk<Request, Reply> {
  ask(request: Request): Promise<Reply>;
}

interface Waiting<Request, Reply> {
  request: Request;
  done: (reply: Reply) => void;
  failed: (reason: unknown) => void;
  begun: () => void;
}

/** Asks in order of importance and drops what has been overtaken. */
export class Line<Request, Reply> {
  private readonly waiting = new Map<string, Waiting<Request, Reply>>();
  private busy = false;

  /** `order`: sorts of request, most urgent first. */
  constructor(
    private readonly desk: Desk<Request, Reply>,
    private readonly order: readonly string[],
  ) {}

  /** Puts a request in; one of the same sort that still waits is dropped. `begun` is called when it is sent. */
  put(
    sort: string,
    request: Request,
    done: (reply: Reply) => void,
    failed: (reason: unknown) => void,
    begun: () => void = () => undefined,
  ): void {
    this.waiting.set(sort, { request, done, failed, begun });
    void this.pump();
  }

  /** Forgets what waits of one sort. */
  drop(sort: string): void {
    this.waiting.delete(sort);
  }

  private async pump(): Promise<void> {
    if (this.busy) return;
    this.busy = true;
    try {
      for (;;) {
        const sort = this.order.find((name) => this.waiting.has(name)) ?? this.waiting.keys().next().value;
        if (sort === undefined) return;
        const next = this.waiting.get(sort);
        this.waiting.delete(sort);
        if (next === undefined) return;
        next.begun();
        try {
          next.done(await this.desk.ask(next.request));
        } catch (reason) {
          next.failed(reason);
        }
      }
    } finally {
      this.busy = false;
    }
  }
}
