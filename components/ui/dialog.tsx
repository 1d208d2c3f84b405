"use client";
// A question that has to be answered before going on. Escape and "Leave it" close it, focus goes back to where it was.
// While an answer is on its way it stays open and cannot be closed.
import type { ReactNode } from "react";
import { Heading, Dialog as Inner, Modal, ModalOverlay } from "react-aria-components";

export type DialogProps = {
  open: boolean;
  onClose: () => void;
  title: string;
  children: ReactNode;
  /** Buttons, the one that acts first. */
  actions?: ReactNode;
  /** The answer is on its way: neither Escape nor a press outside closes it. */
  busy?: boolean;
  /** A press outside closes it too; only where nothing typed can be lost by it. */
  lightly?: boolean;
};

export function Dialog({ open, onClose, title, children, actions, busy = false, lightly = false }: DialogProps) {
  return (
    <ModalOverlay
      className="veil"
      isOpen={open}
      onOpenChange={(isOpen) => {
        if (!isOpen && !busy) onClose();
      }}
      isDismissable={lightly && !busy}
      isKeyboardDismissDisabled={busy}
    >
      <Modal className="sheet">
        <Inner className="dialog">
          <Heading slot="title" level={2} className="lead">
            {title}
          </Heading>
          <div className="matter">{children}</div>
          {actions ? <div className="acts">{actions}</div> : null}
        </Inner>
      </Modal>
    </ModalOverlay>
  );
}
