/** A write whose answer did not come: it may have been done or not. */
export class CommitUnanswered extends Error {
  constructor(cause: unknown) {
    super("the answer to a write did not come", { cause });
    this.name = "CommitUnanswered";
  }
}
