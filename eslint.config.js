import eslint from "@eslint/js";
import reactHooks from "eslint-plugin-react-hooks";
import tseslint from "typescript-eslint";
import { importDirection } from "./scripts/lint/import-direction.mjs";

// Correctly rounded or exact in every engine; Math.exp, sin, pow and their kin differ in the last digit between them.
const exactMath = "sqrt|abs|floor|ceil|round|trunc|min|max|sign|imul";

const noSwitchedOffTests = {
  selector:
    "CallExpression > MemberExpression.callee[object.name=/^(it|test|describe)$/][property.name=/^(only|skip|todo)$/]",
  message: "A switched-off test proves nothing: mend it, remove it, or use skipIf with a reason in its title.",
};

export default tseslint.config(
  { ignores: ["**/dist/", "**/node_modules/", "coverage/", "screenshots/", "drizzle/", ".wavekeep/", ".tmp/"] },
  eslint.configs.recommended,
  // Without type information: the type-checked rules take three times as long as the type check itself.
  tseslint.configs.recommended,
  {
    linterOptions: { reportUnusedDisableDirectives: "error" },
    plugins: { wavekeep: { rules: { "import-direction": importDirection } } },
    rules: {
      "wavekeep/import-direction": "error",
      "max-lines": ["error", { max: 600 }],
      "no-restricted-syntax": ["error", noSwitchedOffTests],
      eqeqeq: "error",
      // The type check knows names; a leading underscore marks what a signature demands but the body does not need.
      "no-undef": "off",
      "@typescript-eslint/no-unused-vars": [
        "error",
        { argsIgnorePattern: "^_", varsIgnorePattern: "^_", caughtErrors: "none" },
      ],
      "@typescript-eslint/consistent-type-imports": "error",
    },
  },
  {
    files: ["packages/web/src/**/*.{ts,tsx}"],
    ...reactHooks.configs.flat.recommended,
  },
  {
    // Reference values stand as published, also where a double holds fewer digits.
    files: ["**/*.test.ts"],
    rules: { "no-loss-of-precision": "off" },
  },
  {
    // The measuring core gives the same bits in Node and in a browser, today and in ten years.
    files: ["packages/core/src/**/*.ts"],
    ignores: ["**/*.test.ts"],
    rules: {
      "no-restricted-globals": [
        "error",
        ...[
          "Date",
          "Intl",
          "process",
          "Buffer",
          "console",
          "performance",
          "fetch",
          "crypto",
          "globalThis",
          "setTimeout",
          "setInterval",
        ].map((name) => ({
          name,
          message: "The measuring core has no clock, no I/O and nothing that depends on the place it runs.",
        })),
      ],
      "no-restricted-syntax": [
        "error",
        noSwitchedOffTests,
        {
          selector: `MemberExpression[object.name='Math'][computed=false]:not([property.name=/^(${exactMath})$/])`,
          message: "Only exactly rounded Math functions; take the others from numeric/elementary.ts.",
        },
        { selector: "MemberExpression[object.name='Math'][computed=true]", message: "Name the Math function plainly." },
        { selector: ":not(MemberExpression) > Identifier[name='Math']", message: "Name the Math function plainly." },
        {
          selector: ":matches(BinaryExpression[operator='**'], AssignmentExpression[operator='**='])",
          message: "`**` differs in the last digit between engines; multiply, or take pow from numeric/elementary.ts.",
        },
        {
          selector: "MemberExpression[property.name=/^(toLocale\\w*|localeCompare)$/]",
          message: "Nothing in the measuring core depends on the locale.",
        },
      ],
    },
  },
);
