/** The queues of pg-boss. Made by the migrating owner; payloads hold ids and the lab only. */
export const queues = {
  deliverMail: "deliver-mail",
  dueAndOverdue: "due-and-overdue",
  asideDrafts: "aside-drafts",
  signHeads: "sign-heads",
  sweep: "sweep",
} as const;

export type QueueName = (typeof queues)[keyof typeof queues];

/** When each tick asks what is due as of now (UTC cron). A missed tick does no harm: the next one asks the same question. */
export const ticks: { queue: QueueName; cron: string }[] = [
  { queue: queues.dueAndOverdue, cron: "*/10 * * * *" },
  { queue: queues.asideDrafts, cron: "*/10 * * * *" },
  { queue: queues.signHeads, cron: "10 * * * *" },
  { queue: queues.sweep, cron: "25 * * * *" },
];
