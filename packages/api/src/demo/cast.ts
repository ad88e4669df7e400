/** The demo lab itself: its people, their sign-ins, its reference sources. All invented; nobody and nothing of this exists. */

export const DEMO_PASSWORD = "bench-book-2027";

export const lab = { name: "Larkmere Water Lab", zone: "Europe/Copenhagen", altitudeM: 48 } as const;

export type PersonKey = "ida" | "tam" | "alix" | "nell" | "oto" | "odd" | "rune";
export const people: Record<
  PersonKey,
  {
    name: string;
    email: string;
    roles: ("manager" | "technician" | "auditor")[];
    isApprover: boolean;
    shownRole: string;
  }
> = {
  ida: {
    name: "Ida Vernier",
    email: "ida.vernier@larkmere.example",
    roles: ["manager"],
    isApprover: true,
    shownRole: "lab manager",
  },
  tam: {
    name: "Tam Ferrule",
    email: "tam.ferrule@larkmere.example",
    roles: ["technician"],
    isApprover: false,
    shownRole: "technician",
  },
  alix: {
    name: "Alix Dowel",
    email: "alix.dowel@larkmere.example",
    roles: ["technician"],
    isApprover: false,
    shownRole: "technician",
  },
  nell: {
    name: "Nell Baffle",
    email: "nell.baffle@larkmere.example",
    roles: [],
    isApprover: false,
    shownRole: "instrument owner",
  },
  oto: {
    name: "Oto Shim",
    email: "oto.shim@larkmere.example",
    roles: [],
    isApprover: false,
    shownRole: "instrument owner",
  },
  odd: {
    name: "Odd Ledger",
    email: "odd.ledger@larkmere.example",
    roles: ["auditor"],
    isApprover: false,
    shownRole: "auditor",
  },
  rune: {
    name: "Rune Collet",
    email: "rune.collet@larkmere.example",
    roles: ["technician"],
    isApprover: true,
    shownRole: "technician, approver",
  },
};

export interface DemoSource {
  label: string;
  name: string;
  kind: "low-pressure-lamp" | "built-in";
  elements: string[];
  maker: string;
  serial: string;
  builtInto: string | null;
  warmUpMinutes: number;
  reviewInDays: number;
  note: string;
}
export const sources: DemoSource[] = [
  {
    label: "HA-1",
    name: "Mercury and argon pen lamp",
    kind: "low-pressure-lamp",
    elements: ["Hg", "Ar"],
    maker: "Tern Lamps (invented)",
    serial: "TL-0417",
    builtInto: null,
    warmUpMinutes: 20,
    reviewInDays: 320,
    note: "On the shelf as the spare since HA-2 came.",
  },
  {
    label: "HA-2",
    name: "Mercury and argon pen lamp",
    kind: "low-pressure-lamp",
    elements: ["Hg", "Ar"],
    maker: "Tern Lamps (invented)",
    serial: "TL-0592",
    builtInto: null,
    warmUpMinutes: 20,
    reviewInDays: 22,
    note: "Keep the quartz clean: no fingers.",
  },
  {
    label: "NE-1",
    name: "Neon glow lamp",
    kind: "low-pressure-lamp",
    elements: ["Ne"],
    maker: "Tern Lamps (invented)",
    serial: "TL-0233",
    builtInto: null,
    warmUpMinutes: 10,
    reviewInDays: 210,
    note: "",
  },
  {
    label: "AR-1",
    name: "Argon pen lamp",
    kind: "low-pressure-lamp",
    elements: ["Ar"],
    maker: "Tern Lamps (invented)",
    serial: "TL-0301",
    builtInto: null,
    warmUpMinutes: 10,
    reviewInDays: 140,
    note: "",
  },
  {
    label: "HG-1",
    name: "Mercury pen lamp",
    kind: "low-pressure-lamp",
    elements: ["Hg"],
    maker: "Tern Lamps (invented)",
    serial: "TL-0188",
    builtInto: null,
    warmUpMinutes: 20,
    reviewInDays: 260,
    note: "",
  },
  {
    label: "D-S",
    name: "Deuterium lamp of Sanderling",
    kind: "built-in",
    elements: ["D"],
    maker: "Saltmarsh Optics (invented)",
    serial: "in SO-88-2107",
    builtInto: "Sanderling",
    warmUpMinutes: 30,
    reviewInDays: 300,
    note: "Only its two sharp lines, 486.00 and 656.10 nm, are used.",
  },
];
