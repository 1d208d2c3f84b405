// Post. Every letter goes into the outbox first; with an SMTP server it is sent from there, again and again until it is taken.
import "server-only";
import { createTransport } from "nodemailer";
import type { Db } from "../../db/client.ts";
import { markSent, postMail, unsentMail } from "../../db/mail.ts";
import type { Settings } from "./env.ts";
import { log } from "./log.ts";

type Receiver = { name: string; email: string };

export async function sendResetLink(db: Db, settings: Settings, to: Receiver, token: string): Promise<void> {
  await postMail(db, {
    to: to.email,
    subject: "Set a new password for Counterleaf",
    text: [
      `${to.name},`,
      "",
      "somebody, probably you, asked for a link to set a new password. It works once, for one hour:",
      "",
      `${settings.url}/reset-password?token=${encodeURIComponent(token)}`,
      "",
      "If it was not you, do nothing: your password stays as it is.",
    ].join("\n"),
  });
}

/** Sends what waits, oldest first. A letter that is not taken stays and is tried again. Answers how many went. */
export async function sendWaiting(db: Db, settings: Settings): Promise<number> {
  if (settings.smtpUrl === null) return 0;
  const waiting = await unsentMail(db, 20);
  if (waiting.length === 0) return 0;
  const post = createTransport(settings.smtpUrl);
  let sent = 0;
  try {
    for (const letter of waiting) {
      try {
        await post.sendMail({
          from: settings.mailFrom,
          to: letter.to,
          subject: letter.subject,
          text: letter.text,
          messageId: `<${letter.id}@counterleaf>`,
        });
        await markSent(db, letter.id);
        sent += 1;
      } catch (error) {
        log.warn({ error, letter: letter.id }, "a letter could not be sent yet");
      }
    }
  } finally {
    post.close();
  }
  return sent;
}
