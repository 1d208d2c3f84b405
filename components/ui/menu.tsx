"use client";
// Words that open into more words: acts, or places to go to.
import type { ReactNode } from "react";
import { Button, Menu as Inner, MenuItem, MenuTrigger, Popover } from "react-aria-components";
import { type ButtonKind, buttonClass } from "./button-class.ts";
import { classOf } from "./field-parts.tsx";

export type MenuAct = {
  id: string;
  label: string;
  aside?: ReactNode;
  /** Where it leads; otherwise `onAct` is called with its id. */
  href?: string;
  current?: boolean;
  stop?: boolean;
  disabled?: boolean;
};

export type MenuProps = {
  /** The words on the button. */
  children: ReactNode;
  acts: readonly MenuAct[];
  onAct?: (id: string) => void;
  kind?: ButtonKind;
  /** Said instead of the words on the button, when these do not say enough. */
  label?: string;
  className?: string;
};

export function Menu({ children, acts, onAct, kind = "plain", label, className }: MenuProps) {
  return (
    <MenuTrigger>
      <Button className={classOf(buttonClass(kind), className)} aria-label={label}>
        {children}
      </Button>
      <Popover className="list-sheet" offset={4}>
        <Inner className="choices" items={acts} onAction={(key) => onAct?.(String(key))}>
          {(act) => (
            <MenuItem
              id={act.id}
              href={act.href}
              textValue={act.label}
              isDisabled={act.disabled}
              className={classOf("choice", act.stop && "stop")}
              aria-current={act.current ? "page" : undefined}
            >
              <span>{act.label}</span>
              {act.aside ? <span className="aside">{act.aside}</span> : null}
            </MenuItem>
          )}
        </Inner>
      </Popover>
    </MenuTrigger>
  );
}
