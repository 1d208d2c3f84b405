import type { Metadata } from "next";
import { formatDateTime } from "../../../components/format.ts";
import { Counterfoil, StubHead, StubSection } from "../../../components/leaf/counterfoil.tsx";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { SideRow } from "../../../components/leaf/side-row.tsx";
import { PlainTable } from "../../../components/ui/plain-table.tsx";
import { Notice } from "../../../components/ui/says.tsx";
import { listSessions } from "../../../db/sessions.ts";
import { readForPage } from "../../_server/page-read.ts";
import { EndSession } from "./_components/end-session.tsx";
import { PasswordForm } from "./_components/password-form.tsx";
import { PreferencesForm } from "./_components/preferences-form.tsx";
import { endOne, endOthers, savePassword, savePreferences } from "./actions.ts";

export const metadata: Metadata = { title: "Your account" };

export default async function AccountPage() {
  const { actor, read: sessions } = await readForPage((actor, db) => listSessions(db, actor));
  return (
    <Leaf
      counterfoil={
        <Counterfoil head={<StubHead number={<span className="as-name">{actor.printedName}</span>} of={actor.email} />}>
          <StubSection title="Roles">
            {actor.roles.length === 0 ? <p>None yet. An administrator gives them.</p> : <p>{actor.roles.join(", ")}</p>}
            <p className="note">Nobody changes their own roles. The name stays with what it signed.</p>
          </StubSection>
        </Counterfoil>
      }
    >
      <LeafTitle under="How numbers and times are shown to you, your password, and where you are signed in.">
        Your account
      </LeafTitle>
      {actor.signingHeld ? (
        <Notice kind="warn" finding="Signing is held.">
          An administrator began a reset of your password. A supervisor or another administrator has to confirm who you
          are before you sign.
        </Notice>
      ) : null}
      <SideRow label="Numbers and times" level={2} first>
        <PreferencesForm
          decimalSign={actor.decimalSign}
          timeZone={actor.timeZone}
          zones={["UTC", ...Intl.supportedValuesOf("timeZone")]}
          save={savePreferences}
        />
      </SideRow>
      <SideRow label="Password" level={2}>
        <PasswordForm save={savePassword} />
      </SideRow>
      <SideRow label="Sessions" note={`${sessions.length} open`} level={2}>
        <PlainTable
          caption="Where you are signed in"
          captionHidden
          columns={[
            { id: "agent", head: "Browser", names: true },
            { id: "since", head: "Signed in" },
            { id: "used", head: "Last used" },
            { id: "end", head: "Ends at the latest" },
            { id: "act", head: "Act" },
          ]}
          rows={sessions.map((session) => ({
            key: session.id,
            cells: [
              browserOf(session.userAgent),
              formatDateTime(session.createdAt, actor.timeZone),
              formatDateTime(session.lastUsedAt, actor.timeZone),
              formatDateTime(session.expiresAt, actor.timeZone),
              session.isThis ? "this one" : <EndSession key="end" words="End it" end={endOne} sessionId={session.id} />,
            ],
          }))}
        />
        {sessions.length > 1 ? <EndSession words="End all the others" end={endOthers} /> : null}
      </SideRow>
    </Leaf>
  );
}

const BROWSERS = [
  [/Firefox\//, "Firefox"],
  [/Edg\//, "Edge"],
  [/Chrom(e|ium)\//, "Chromium or Chrome"],
  [/Safari\//, "Safari"],
] as const;

function browserOf(agent: string | null): string {
  if (agent === null) return "unknown";
  return BROWSERS.find(([pattern]) => pattern.test(agent))?.[1] ?? agent.slice(0, 40);
}
