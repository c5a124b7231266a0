// How a request can fail. All are Errors, so that `instanceof` tells them apart.
import type { Refusal } from "../../shared/generated/Refusal";
import type { Request } from "../../shared/generated/Request";

/** The request was understood and refused: the refusal names field, value and what is allowed. */
export class Refused extends Error {
  override name = "Refused";
  constructor(readonly refusal: Refusal) {
    super(refusal.message);
  }
}

/** The engine broke down on this request; its worker has been replaced. */
export class Trapped extends Error {
  override name = "Trapped";
  constructor(
    message: string,
    readonly request: Request | undefined,
  ) {
    super(message);
  }
}

/** Cancelled, or superseded by a newer request. */
export class Cancelled extends Error {
  override name = "Cancelled";
  constructor() {
    super("cancelled");
  }
}

/** No worker starts in this browser. */
export class BootFailed extends Error {
  override name = "BootFailed";
}
