/** Sentences of the mails that people and sign-in cause. Links stand on a line of their own. */

interface MailText {
  subject: string;
  text: string;
}

const letter = (...paragraphs: string[]): string => `${paragraphs.join("\n\n")}\n`;

export const resetMail = ({ name, link }: { name: string; link: string }): MailText => ({
  subject: "A new password for Wavekeep",
  text: letter(
    `Hello ${name},`,
    "somebody, most likely you, asked for a new password. Set it here within an hour:",
    link,
    "Did you not ask? Then do nothing: your password stays as it is.",
  ),
});

export const invitationMail = ({
  labName,
  invitedBy,
  roles,
  link,
  expiresOn,
}: {
  labName: string;
  invitedBy: string;
  roles: readonly string[];
  link: string;
  expiresOn: string;
}): MailText => ({
  subject: `${labName} invites you to Wavekeep`,
  text: letter(
    "Hello,",
    `${invitedBy} invites you to the lab ${labName} as ${roles.join(" and ")}. Wavekeep is where the lab keeps the wavelength checks of its spectrometers.`,
    "Accept here:",
    link,
    `The link can be used once, until ${expiresOn}.`,
  ),
});

export const rolesChangedMail = ({
  name,
  labName,
  by,
  roles,
}: {
  name: string;
  labName: string;
  by: string;
  roles: readonly string[];
}): MailText => ({
  subject: `Your roles in ${labName} changed`,
  text: letter(
    `Hello ${name},`,
    `${by} changed what you may do in ${labName}: ${roles.length === 0 ? "no role of your own any more" : roles.join(" and ")}.`,
  ),
});

export const headMail = ({
  labName,
  number,
  hash,
  at,
  fingerprint,
  signature,
}: {
  labName: string;
  number: number;
  hash: string;
  at: string;
  fingerprint: string;
  signature: string;
}): MailText => ({
  subject: `Head of the trail of ${labName}: entry ${number}`,
  text: letter(
    `The trail of ${labName} stood at entry ${number} on ${at}.`,
    `Hash       ${hash}\nSignature  ${signature}\nKey        ${fingerprint}`,
    "Keep this mail. If the trail is ever shortened or written anew, it will not lead to this hash any more.",
  ),
});
