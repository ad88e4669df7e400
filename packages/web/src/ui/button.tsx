/** What can be pressed: one filled button a view, the others outlined; links in accent with a thin line under them. */
import type { ButtonHTMLAttributes, ReactNode, Ref } from "react";
import { Link, type To } from "react-router";

interface ButtonProps extends ButtonHTMLAttributes<HTMLButtonElement> {
  /** The thing to do now. */
  filled?: boolean;
  /** True while the server works on it: the button waits, and says so. */
  busy?: boolean;
  ref?: Ref<HTMLButtonElement>;
}

export function Button({
  filled = false,
  busy = false,
  type = "button",
  className,
  disabled,
  children,
  ...rest
}: ButtonProps) {
  return (
    <button
      type={type}
      className={`button ${filled ? "button-filled" : ""} ${className ?? ""}`}
      disabled={disabled === true || busy}
      aria-busy={busy || undefined}
      {...rest}
    >
      {children}
      {busy && <span className="sr-only">, working</span>}
    </button>
  );
}

interface LinkProps {
  to: To;
  children: ReactNode;
  className?: string;
  title?: string;
  "aria-label"?: string;
}

/** A link that looks like a button: it leads to where the thing is done. */
export function LinkButton({ filled = false, className, ...rest }: LinkProps & { filled?: boolean }) {
  return <Link className={`button ${filled ? "button-filled" : ""} ${className ?? ""}`} {...rest} />;
}

/** A link in text. */
export function TextLink({ className, ...rest }: LinkProps) {
  return <Link className={`text-link ${className ?? ""}`} {...rest} />;
}

/** A link's look for what acts on the spot. */
export function TextButton({
  className,
  type = "button",
  ...rest
}: ButtonHTMLAttributes<HTMLButtonElement> & { ref?: Ref<HTMLButtonElement> }) {
  return <button type={type} className={`text-link ${className ?? ""}`} {...rest} />;
}

/** A file to take away, e.g. `api` bytes: a plain anchor, since the router must not take it. */
export function FileLink({
  href,
  download,
  children,
  className,
}: {
  href: string;
  download?: string | boolean;
  children: ReactNode;
  className?: string;
}) {
  return (
    <a href={href} download={download} className={`text-link ${className ?? ""}`}>
      {children}
    </a>
  );
}
