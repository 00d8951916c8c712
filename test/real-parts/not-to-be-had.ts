/** A real part that cannot be had: one line that says what to install or which address to give. A test that needs it fails with it. */
export class NotToBeHad extends Error {
  constructor(what: string, todo: string) {
    super(`${what} is not to be had here: ${todo}`);
    this.name = "NotToBeHad";
  }
}
