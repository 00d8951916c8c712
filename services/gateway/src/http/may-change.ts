import { timingSafeEqual } from "node:crypto";
import type { Request } from "express";

const LOOPBACK = new Set(["127.0.0.1", "::1", "localhost"]);

/**
 * Who may change something over HTTP. With a token (MOORLINE_GATEWAY_TOKEN) its bearer; without one only requests to a gateway that listens on the
 * loopback alone, and of those none that a page of another origin sent.
 */
export function mayChange(request: Request, listenHost: string, token: string | undefined): boolean {
  if (token !== undefined && token !== "") {
    const given = Buffer.from(request.get("authorization") ?? "");
    const wanted = Buffer.from(`Bearer ${token}`);
    return given.length === wanted.length && timingSafeEqual(given, wanted);
  }
  if (!LOOPBACK.has(listenHost)) return false;
  const origin = request.get("origin");
  return origin === undefined || origin === `http://${request.get("host")}`;
}
