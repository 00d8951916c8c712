import type { AuditFinding } from "../audit-report.js";

/** A store that is wrong in one place is often wrong in a thousand: the first ones tell which, the rest is counted. */
const MOST_FINDINGS = 200;

/** Gathers what an audit of one stream finds. */
export class Findings {
  readonly #stream: string;
  readonly #list: AuditFinding[] = [];
  #more = 0;

  constructor(stream: string) {
    this.#stream = stream;
  }

  add(invariant: 1 | 2, where: string, sentence: string): void {
    if (this.#list.length < MOST_FINDINGS)
      this.#list.push({ invariant, stream: this.#stream, where, sentence });
    else this.#more += 1;
  }

  list(): readonly AuditFinding[] {
    if (this.#more === 0) return this.#list;
    const sentence = `${this.#more} more findings are not listed`;
    return [...this.#list, { invariant: 1, stream: this.#stream, where: this.#stream, sentence }];
  }
}
