/**
 * Fills the demo lab, once, at the first start: the story's deeds in their order of time, through the same services that
 * people use, under a clock that only the seeding role may state and only in a lab marked *demo*.
 *
 * Run as a program of its own with the seeding role's DATABASE_URL; prints progress, and the sign-ins as its last line.
 */
import { openAnalyser } from "../checks/analyser.ts";
import { loadConfig } from "../config.ts";
import { openDatabase } from "../db/connection.ts";
import { dateIn } from "../instruments/dates.ts";
import { openSigningKey } from "../records/signing.ts";
import { DEMO_PASSWORD, lab, people } from "./cast.ts";
import { tellStory } from "./tell-story.ts";

async function main(): Promise<void> {
  const config = loadConfig(process.env);
  const db = openDatabase(config.databaseUrl, { max: 4 });
  const analyser = openAnalyser({ threads: 2 });
  try {
    await tellStory(
      {
        db,
        analyser,
        signer: openSigningKey(config.signingKeyFile),
        config,
      },
      dateIn(lab.zone, new Date()),
      (line) => process.stdout.write(`${line}\n`),
    );
  } finally {
    await analyser.close();
    await db.close();
  }
  const signIns = Object.values(people).map(({ name, email, shownRole }) => ({
    email,
    password: DEMO_PASSWORD,
    who: `${name}, ${shownRole}`,
    name,
    role: shownRole,
  }));
  process.stdout.write(`${JSON.stringify(signIns)}\n`);
}

await main();
