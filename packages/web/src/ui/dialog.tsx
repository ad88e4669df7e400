/** Dialogs: for what must be decided before anything else, and never without its consequence in words. */
import { Dialog as Radix } from "radix-ui";
import { useState, type FormEvent, type ReactNode } from "react";
import { Button } from "./button.tsx";
import { PasswordField } from "./field.tsx";
import { ProblemNote } from "./problem-note.tsx";

interface DialogProps {
  open: boolean;
  onClose: () => void;
  title: ReactNode;
  /** What will happen, in words. */
  lead?: ReactNode;
  children?: ReactNode;
  /** Buttons, the thing to do first. A way out is always added. */
  actions?: ReactNode;
  /** Word of the way out. */
  closeLabel?: string;
}

interface SheetProps {
  className: string;
  /** True when a `Radix.Description` stands inside. */
  described: boolean;
  children: ReactNode;
}

/** What lies over the page. Whoever had the focus when it opened has it again when it closes. */
export function DialogSheet({ className, described, children }: SheetProps) {
  const [opener] = useState(() => document.activeElement);
  return (
    <Radix.Content
      className={className}
      {...(described ? {} : { "aria-describedby": undefined })}
      onCloseAutoFocus={(event) => {
        // Radix gives it to a trigger of its own, and our dialogs have none.
        event.preventDefault();
        if (opener instanceof HTMLElement) opener.focus();
      }}
    >
      {children}
    </Radix.Content>
  );
}

export function Dialog({ open, onClose, title, lead, children, actions, closeLabel = "Cancel" }: DialogProps) {
  return (
    <Radix.Root open={open} onOpenChange={(next) => !next && onClose()}>
      <Radix.Portal>
        <Radix.Overlay className="overlay" />
        <DialogSheet className="dialog" described={lead !== undefined}>
          <Radix.Title className="type-head">{title}</Radix.Title>
          {lead !== undefined && <Radix.Description className="mt-2">{lead}</Radix.Description>}
          <div className="mt-4">{children}</div>
          <div className="mt-5 flex flex-wrap items-center gap-3">
            {actions}
            <Button onClick={onClose}>{closeLabel}</Button>
          </div>
        </DialogSheet>
      </Radix.Portal>
    </Radix.Root>
  );
}

interface PasswordDialogProps {
  open: boolean;
  onClose: () => void;
  title: ReactNode;
  /** What the signature means, as it will be printed: `made by`, `reviewed and approved`. */
  meaning: string;
  /** What signing does: *locks version 2*. */
  lead?: ReactNode;
  /** Word of the button. */
  confirmLabel?: string;
  /** What else must be filled in or seen before the signature can be given. */
  children?: ReactNode;
  /** False until everything above is seen. */
  ready?: boolean;
  /** Does the thing; what it throws is shown, and the dialog stays. */
  onConfirm: (password: string) => Promise<unknown>;
}

/** The password again, for what is signed. A second press while the first is under way does nothing. */
export function PasswordDialog({
  open,
  onClose,
  title,
  meaning,
  lead,
  confirmLabel = "Sign",
  children,
  ready = true,
  onConfirm,
}: PasswordDialogProps) {
  const [password, setPassword] = useState("");
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<unknown>(null);
  const close = () => {
    setPassword("");
    setProblem(null);
    onClose();
  };
  const confirm = async (event: FormEvent) => {
    event.preventDefault();
    if (busy || !ready || password === "") return;
    setBusy(true);
    setProblem(null);
    try {
      await onConfirm(password);
      close();
    } catch (error) {
      setProblem(error);
    } finally {
      setBusy(false);
    }
  };
  return (
    <Radix.Root open={open} onOpenChange={(next) => !next && !busy && close()}>
      <Radix.Portal>
        <Radix.Overlay className="overlay" />
        <DialogSheet className="dialog" described={lead !== undefined}>
          <form onSubmit={(event) => void confirm(event)}>
            <Radix.Title className="type-head">{title}</Radix.Title>
            {lead !== undefined && <Radix.Description className="mt-2">{lead}</Radix.Description>}
            {children !== undefined && <div className="mt-4">{children}</div>}
            <PasswordField
              className="mt-4"
              label="Your password"
              autoComplete="current-password"
              value={password}
              onChange={(event) => setPassword(event.target.value)}
              note={`Signing prints your name, the time and the meaning “${meaning}”.`}
            />
            {problem !== null && <ProblemNote error={problem} className="mt-3" />}
            <div className="mt-5 flex flex-wrap items-center gap-3">
              <Button filled type="submit" busy={busy} disabled={!ready || password === ""}>
                {confirmLabel}
              </Button>
              <Button onClick={close} disabled={busy}>
                Cancel
              </Button>
            </div>
          </form>
        </DialogSheet>
      </Radix.Portal>
    </Radix.Root>
  );
}
