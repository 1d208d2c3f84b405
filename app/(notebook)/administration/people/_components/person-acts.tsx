"use client";
import { StateMark } from "../../../../../components/leaf/state-mark.tsx";
import type { Answered } from "../../../../_components/answered.ts";
import { ReasonedAct } from "../../../../_components/reasoned-act.tsx";

type Act = (raw: unknown) => Promise<Answered<unknown>>;

type TicksProps = { personId: string; name: string; held: string[]; roles: readonly string[]; give: Act; take: Act };

/** Each role with what can be done about it; both ask why. */
export function RoleTicks({ personId, name, held, roles, give, take }: TicksProps) {
  return (
    <ul className="plain">
      {roles.map((role) => (
        <li key={role}>
          {held.includes(role) ? (
            <>
              <b>{role}</b>{" "}
              <ReasonedAct
                words="take away"
                title={`Take the role of ${role} from ${name}?`}
                doWords="Take it away"
                stops
                act={(reason) => take({ personId, role, reason })}
              >
                <p>Open pages of theirs follow within seconds. What they signed stays as it is.</p>
              </ReasonedAct>
            </>
          ) : (
            <>
              <span className="faint">{role}</span>{" "}
              <ReasonedAct
                words="give"
                title={`Make ${name} a ${role}?`}
                doWords="Give the role"
                act={(reason) => give({ personId, role, reason })}
              >
                <p>The role qualifies; a notebook is opened to them by making them its member.</p>
              </ReasonedAct>
            </>
          )}
        </li>
      ))}
    </ul>
  );
}

type ActsProps = { personId: string; name: string; held: boolean; close: Act; reset: Act; confirm: Act };

export function PersonActs({ personId, name, held, close, reset, confirm }: ActsProps) {
  return (
    <ul className="plain">
      {held ? (
        <li>
          <StateMark state="waiting">Signing is held</StateMark>{" "}
          <ReasonedAct
            words="confirm who it is"
            title={`Confirm that this is ${name}?`}
            doWords="Confirm"
            label="How do you know?"
            act={(how) => confirm({ personId, how })}
          >
            <p>Confirm only after you have seen or spoken to the person. Whoever began the reset cannot confirm it.</p>
          </ReasonedAct>
        </li>
      ) : null}
      <li>
        <ReasonedAct
          words="Begin a password reset"
          title={`Begin a password reset for ${name}?`}
          doWords="Send the link"
          act={(reason) => reset({ personId, reason })}
        >
          <p>
            A link goes to their e-mail; you do not see it. Their signing is held until a second person has confirmed
            who they are.
          </p>
        </ReasonedAct>
      </li>
      <li>
        <ReasonedAct
          words="Close the account"
          kind="quiet-stop"
          title={`Close the account of ${name}?`}
          doWords="Close it"
          stops
          act={(reason) => close({ personId, reason })}
        >
          <p>
            Their sessions end within seconds. Their name stays on what they signed, and the account is never given to
            anybody else.
          </p>
        </ReasonedAct>
      </li>
    </ul>
  );
}
