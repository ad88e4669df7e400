import { cleanup, render, screen } from "@testing-library/react";
import userEvent from "@testing-library/user-event";
import { useState } from "react";
import { afterEach, expect, test, vi } from "vitest";
import { PasswordDialog } from "./dialog.tsx";
import { NumberField } from "./field.tsx";
import { Menu } from "./menu.tsx";
import { Switches } from "./parts.tsx";
import { Decimal, Quantity } from "./quantity.tsx";
import { Status } from "./status.tsx";

afterEach(cleanup);

function NumberHarness({ onRead }: { onRead: (value: number | null) => void }) {
  const [value, setValue] = useState<number | null>(null);
  return (
    <NumberField
      label="Room temperature"
      unit="°C"
      value={value}
      onChange={(next) => {
        setValue(next);
        onRead(next);
      }}
    />
  );
}

test("a decimal comma is understood and the reading shown beside what was typed", async () => {
  const onRead = vi.fn();
  render(<NumberHarness onRead={onRead} />);
  const field = screen.getByLabelText("Room temperature");
  await userEvent.type(field, "21,6");
  expect((field as HTMLInputElement).value).toBe("21,6");
  expect(onRead).toHaveBeenLastCalledWith(21.6);
  expect(document.body.textContent).toContain("Read as 21.6\u202f°C");
});

test("what cannot be read is said, kept, and handed on as not a number", async () => {
  const onRead = vi.fn();
  render(<NumberHarness onRead={onRead} />);
  const field = screen.getByLabelText("Room temperature");
  await userEvent.type(field, "warm");
  expect((field as HTMLInputElement).value).toBe("warm");
  expect(onRead.mock.lastCall?.[0]).toBeNaN();
  expect(field.getAttribute("aria-invalid")).toBe("true");
  await userEvent.clear(field);
  expect(onRead).toHaveBeenLastCalledWith(null);
});

test("a menu opens, is walked by arrows, and gives the focus back on Esc", async () => {
  const onInk = vi.fn();
  render(
    <Menu
      label="Theme: Paper"
      groups={[
        {
          items: [
            { key: "p", label: "Paper", chosen: true, onChoose: vi.fn() },
            { key: "i", label: "Ink", chosen: false, onChoose: onInk },
          ],
        },
      ]}
    />,
  );
  const button = screen.getByRole("button", { name: "Theme: Paper" });
  await userEvent.click(button);
  expect(document.activeElement).toBe(screen.getByRole("menuitemradio", { name: "Paper" }));
  await userEvent.keyboard("{Escape}");
  expect(screen.queryByRole("menu")).toBeNull();
  expect(document.activeElement).toBe(button);
  await userEvent.keyboard("{ArrowDown}{ArrowDown}{Enter}");
  expect(onInk).toHaveBeenCalledOnce();
});

test("switches are one tab stop; arrows choose and go round", async () => {
  const onChange = vi.fn();
  render(
    <Switches
      label="Scale"
      value="log"
      onChange={onChange}
      choices={[
        { value: "root", label: "root counts" },
        { value: "linear", label: "linear" },
        { value: "log", label: "log" },
      ]}
    />,
  );
  await userEvent.tab();
  expect(document.activeElement).toBe(screen.getByRole("radio", { name: "log" }));
  await userEvent.keyboard("{ArrowDown}");
  expect(onChange).toHaveBeenLastCalledWith("root");
});

test("a signature is sent once however often the button is pressed, and a refusal keeps the dialog", async () => {
  let refuse: (error: Error) => void = () => undefined;
  const onConfirm = vi.fn(() => new Promise((_, reject) => (refuse = reject)));
  const onClose = vi.fn();
  render(<PasswordDialog open onClose={onClose} title="Sign" meaning="made by" onConfirm={onConfirm} />);
  await userEvent.type(screen.getByLabelText("Your password"), "secret words");
  const button = screen.getByRole("button", { name: /^Sign/ });
  await userEvent.click(button);
  await userEvent.click(button);
  await userEvent.keyboard("{Enter}");
  expect(onConfirm).toHaveBeenCalledExactlyOnceWith("secret words");
  refuse(new Error("That was not your password."));
  expect(await screen.findByText(/That was not your password/)).toBeTruthy();
  expect(onClose).not.toHaveBeenCalled();
});

test("a state is a shape and a word; a quantity without an uncertainty says so", () => {
  render(
    <>
      <Status state="near-limit" />
      <Quantity value={0.313} expandedUnc={null} unit="nm" signed decimals={3} />
    </>,
  );
  expect(screen.getByText("near limit").previousElementSibling?.tagName.toLowerCase()).toBe("svg");
  expect(document.body.textContent).toContain("+0.313\u202fnm (U not estimated)");
});

test("numbers of a column keep room for its most decimals, each one piece of text", () => {
  const { container } = render(
    <table>
      <tbody>
        <tr>
          <td>
            <Decimal value={588.1895} decimals={4} columnDecimals={4} />
          </td>
          <td>
            <Decimal value={0.15} decimals={2} columnDecimals={3} unit="nm" />
          </td>
          <td>
            <Decimal value={12} decimals={0} columnDecimals={2} />
          </td>
        </tr>
      </tbody>
    </table>,
  );
  expect(screen.getByRole("row", { name: "588.1895 0.15 nm 12" })).toBeTruthy();
  const numbers = [...container.querySelectorAll("td span span")] as HTMLElement[];
  expect(numbers.map((number) => number.childNodes.length)).toEqual([1, 1, 1]);
  expect(numbers.map((number) => number.style.display)).toEqual(["", "", ""]);
  expect(numbers.map((number) => number.getAttribute("style"))).toEqual([
    null,
    "padding-right: 1ch;",
    "padding-right: calc(2 * 1ch + 0.27em);",
  ]);
});
