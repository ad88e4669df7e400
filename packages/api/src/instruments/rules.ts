/** What the shapes of instruments and configurations can't say alone. */
import type { z } from "zod";
import type { configurationInput } from "../contract/instruments.ts";
import type { toleranceSegment } from "../contract/common.ts";
import { problem } from "../http/problem.ts";
import type { Tx } from "../db/tenancy.ts";
import { findOptionalMember, type InstrumentRow } from "./queries.ts";

type ConfigurationInput = z.output<typeof configurationInput>;
type Segment = z.output<typeof toleranceSegment>;
type FieldNote = { path: string; message: string };

/** Throw what was found, all at once, the first for the form to focus. */
export function refuseFields(fields: FieldNote[]): void {
  if (fields.length === 0) return;
  throw problem(
    "invalid-input",
    fields.length === 1
      ? `${fields[0]!.message} Nothing was stored.`
      : `${fields.length} fields need another look. Nothing was stored.`,
    { fields },
  );
}

export function configurationProblems(
  input: Omit<ConfigurationInput, "axisCoefficients"> & { axisCoefficients?: number[] | null },
  path: string,
): FieldNote[] {
  const fields: FieldNote[] = [];
  if (input.rangeFirstNm >= input.rangeLastNm) {
    fields.push({
      path: `${path}rangeLastNm`,
      message: `The range must end above ${input.rangeFirstNm} nm, where it begins.`,
    });
  }
  const coefficients = input.axisCoefficients ?? null;
  if (coefficients !== null && input.axisKind === "wavelength") {
    fields.push({
      path: `${path}axisCoefficients`,
      message:
        "An instrument that shows wavelengths itself has no coefficients here; choose a pixel axis to enter them.",
    });
  } else if (coefficients !== null && !risesOrFalls(coefficients, input.optics.pixels ?? 2048)) {
    fields.push({
      path: `${path}axisCoefficients`,
      message:
        "With these coefficients the wavelength turns back within the detector. Check their order: nm, ascending powers of the pixel.",
    });
  }
  return fields;
}

/** The wavelength only rises or only falls from the first pixel to the last, looked at in 256 places. */
export function risesOrFalls(coefficients: readonly number[], pixels: number): boolean {
  const at = (pixel: number) => coefficients.reduceRight((sum, coefficient) => sum * pixel + coefficient, 0);
  const steps = 256;
  const values = Array.from({ length: steps + 1 }, (_, i) => at((i * (pixels - 1)) / steps));
  const direction = Math.sign(values[steps]! - values[0]!);
  return direction !== 0 && values.every((value, i) => i === 0 || Math.sign(value - values[i - 1]!) === direction);
}

export function toleranceProblems(segments: readonly Segment[], path: string): FieldNote[] {
  const fields: FieldNote[] = [];
  segments.forEach((segment, index) => {
    if (segment.fromNm >= segment.toNm) {
      fields.push({
        path: `${path}${index}.toNm`,
        message: `Segment ${index + 1} must end above ${segment.fromNm} nm, where it begins.`,
      });
    }
    const before = segments[index - 1];
    if (before !== undefined && segment.fromNm < before.toNm) {
      fields.push({
        path: `${path}${index}.fromNm`,
        message: `Segment ${index + 1} begins before segment ${index} ends; segments follow each other without overlapping.`,
      });
    }
  });
  return fields;
}

/** Among the present configurations of an instrument each is called by a name of its own. */
export function nameProblem(name: string | null, taken: readonly string[], path: string): FieldNote[] {
  if (name === null)
    return [{ path, message: "Give it a name, such as its channel or grating: with more than one, each has its own." }];
  const isTaken = taken.some((other) => other.toLowerCase() === name.toLowerCase());
  return isTaken ? [{ path, message: `Another one is called ${name} already; choose another name.` }] : [];
}

/** An owner is any present member but a pure auditor. */
export async function assertCanOwn(tx: Tx, personId: string): Promise<{ name: string }> {
  const member = await findOptionalMember(tx, personId);
  const pureAuditor = member !== null && member.roles.length === 1 && member.roles[0] === "auditor";
  if (member === null || pureAuditor) {
    const message =
      member === null
        ? "This person is no member of the lab now; choose another owner."
        : `${member.name} is an auditor only and can't own an instrument; choose another owner.`;
    throw problem("invalid-input", `${message} Nothing was stored.`, { fields: [{ path: "ownerId", message }] });
  }
  return member;
}

/** Who is asked to make a check must be able to. */
export async function assertCanBeAssigned(tx: Tx, personId: string): Promise<void> {
  const member = await findOptionalMember(tx, personId);
  if (member !== null && member.roles.some((role) => role === "technician" || role === "manager")) return;
  const message =
    member === null
      ? "This person is no member of the lab now."
      : `${member.name} is neither technician nor manager and can't make a check.`;
  throw problem("invalid-input", `${message} Nothing was stored.`, { fields: [{ path: "assignedToId", message }] });
}

/** @throws problem "conflict" for what only a living instrument can have */
export function assertNotRetired(instrument: Pick<InstrumentRow, "name" | "retiredAt">): void {
  if (instrument.retiredAt !== null)
    throw problem("conflict", `${instrument.name} is retired: its record stays, and nothing new is made for it.`);
}
