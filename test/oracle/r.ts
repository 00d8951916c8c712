import { WebR } from "webr";

/** R itself, compiled to WebAssembly: numbers in, numbers out, with all their digits. One instance a test file. */
export class R {
  readonly #webr: WebR;

  private constructor(webr: WebR) {
    this.#webr = webr;
  }

  static async start(): Promise<R> {
    const webr = new WebR();
    await webr.init();
    return new R(webr);
  }

  /** Evaluates R code and returns what it yields as numbers; NA and NaN come as NaN. */
  async numbers(code: string): Promise<number[]> {
    const result = await this.#webr.evalR(`suppressWarnings(as.double({${code}}))`);
    const numbers = (await result.toJs()) as { readonly values: readonly (number | null)[] };
    await this.#webr.destroy(result);
    return numbers.values.map((value) => value ?? Number.NaN);
  }

  async number(code: string): Promise<number> {
    const [first, ...rest] = await this.numbers(code);
    if (first === undefined || rest.length > 0) throw new Error(`not one number: ${code}`);
    return first;
  }

  async text(code: string): Promise<string> {
    return (await this.#webr.evalRRaw(`as.character({${code}})`, "string")) as string;
  }

  /** Makes a vector of these values known to R under a name. */
  async assign(name: string, values: readonly number[]): Promise<void> {
    await this.#webr.objs.globalEnv.bind(name, [...values]);
  }

  close(): void {
    this.#webr.close();
  }
}
