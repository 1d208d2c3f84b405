// Passwords as they are kept: the sign-in library's own scrypt.
import "server-only";
import { hashPassword as hash, verifyPassword as verify } from "better-auth/crypto";

export function hashPassword(password: string): Promise<string> {
  return hash(password);
}

export function matchesPassword(kept: string, password: string): Promise<boolean> {
  return verify({ hash: kept, password });
}
