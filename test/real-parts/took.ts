/** Says once which real part was taken, so that a test's output shows what it ran against. */
const said = new Set<string>();

export function took(part: string, via: string): void {
  const line = `${part}: ${via}`;
  if (said.has(line)) return;
  said.add(line);
  console.info(`real part – ${line}`);
}
