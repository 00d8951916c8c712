import { randomBytes } from "node:crypto";

/** 16 bytes as base64url. One that starts with a dash would be taken for an option. */
export function newClusterId(): string {
  return randomBytes(16).toString("base64url").replace(/^-/, "A");
}
