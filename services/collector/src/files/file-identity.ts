import { createHash } from "node:crypto";
import type { LineReader } from "./line-reader.js";

const HEAD_BYTES = 1024;

/**
 * What a file is known by: the hash of its first bytes, as many as it had when it was first read. Files that only grow keep it; it
 * survives a copy or another mount, which inode numbers do not.
 */
export async function fileIdentity(reader: LineReader): Promise<string> {
  return identityOf(await reader.head(Math.min(HEAD_BYTES, await reader.sizeBytes())));
}

/** Does the file still begin with the bytes that this identity was made of? */
export async function hasIdentity(reader: LineReader, identity: string): Promise<boolean> {
  const bytes = Number(/^head:(\d{1,4}):/.exec(identity)?.[1] ?? Number.NaN);
  if (!(bytes <= HEAD_BYTES)) return false;
  return identityOf(await reader.head(bytes)) === identity;
}

function identityOf(head: Buffer): string {
  return `head:${head.length}:${createHash("sha256").update(head).digest("hex").slice(0, 16)}`;
}
