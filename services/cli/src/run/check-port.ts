import { createServer } from "node:net";
import { MoorlineError } from "@moorline/errors";

/** Tries a port before anything is started, so that a taken one is said at once and plainly. @throws MOORLINE_UPSTREAM_PORT… */
export async function checkPort(
  listen: { readonly host: string; readonly port: number },
  service: string,
): Promise<void> {
  if (listen.port === 0) return;
  const server = createServer();
  try {
    await new Promise<void>((resolve, reject) => {
      server.once("error", reject);
      server.listen(listen.port, listen.host, resolve);
    });
  } catch (cause) {
    const { code } = cause as NodeJS.ErrnoException;
    const details = { ...listen, service, reason: code ?? String(cause) };
    if (code === "EADDRINUSE") throw new MoorlineError("MOORLINE_UPSTREAM_PORT_TAKEN", details, { cause });
    throw new MoorlineError("MOORLINE_UPSTREAM_PORT_DENIED", details, { cause });
  }
  await new Promise((resolve) => server.close(resolve));
}
