/**
 * Loaded before a server's program (`node --import`): when the command that started it is gone, killed or not, the
 * server ends as on SIGTERM and leaves no orphan on its port.
 */
import { isMainThread } from "node:worker_threads";

if (isMainThread && process.channel !== undefined) {
  process.once("disconnect", () => process.kill(process.pid, "SIGTERM"));
  process.channel.unref();
}
