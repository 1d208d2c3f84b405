// Which passwords are refused. Length decides; no rule about kinds of characters, no forced change (NIST SP 800-63B-4, 3.1.1.2;
// OWASP ASVS 5.0, 6.2). The list of common ones is from memory, not copied from a collection: it holds only what has 12
// characters or more, because shorter ones are refused anyway.
import "server-only";

export const PASSWORD_LEAST = 12;
export const PASSWORD_MOST = 256;

export type PasswordFault = "too-short" | "too-long" | "common" | "own-name";

const COMMON = new Set(
  `123456789012 1234567890123 12345678901234 123456789123 111111111111 000000000000 112233445566 121212121212 123123123123
   123321123321 987654321098 098765432109 qwertyuiopas qwertyuiop12 qwertyuiop123 qwerty123456 qwerty12345678 qwertyqwerty
   qwertzuiopas qwerty1234567 1q2w3e4r5t6y 1q2w3e4r5t6y7u 1qaz2wsx3edc 1qaz2wsx3edc4rfv qazwsxedcrfv zaq12wsxcde3 asdfghjkl123
   asdfghjklzxc zxcvbnm12345 zxcvbnmasdfg passwordpassword password1234 password12345 password123456 password2020 password2021
   password2022 password2023 password2024 password2025 password2026 passw0rd1234 p4ssw0rd1234 mypassword123 mypassword12 newpassword1
   newpassword12 newpassword123 changeme1234 changeme12345 changemenow1 changeme2024 changeme2025 changeme2026 letmein12345 letmein123456
   letmeinplease letmeinnow123 welcome12345 welcome123456 welcome12346 welcome2024! welcome2025! welcome2026! administrator
   administrator1 administrator123 admin1234567 admin12345678 adminadmin12 adminadminadmin rootrootroot superuser123 iloveyou1234
   iloveyou12345 iloveyouforever iloveyousomuch ilovemyfamily sunshine1234 sunshine12345 princess1234 princess12345 football1234
   football12345 baseball1234 basketball12 basketball123 superman1234 batman123456 dragon123456 monkey123456 shadow123456 master123456
   michael12345 jennifer1234 charlie12345 summer202400 spring202400 winter202400 autumn202400 correcthorse correcthorsebattery
   correcthorsebatterystaple thisismypassword thisisapassword trustno1trustno1 abc123abc123 abcd12345678 abcdefghijkl abcdefghijklm
   abcdefg12345 aaaaaabbbbbb a1b2c3d4e5f6 a123456789012 asdasdasdasd qweqweqweqwe starwars1234 pokemon12345 whateverwhatever laboratory12
   laboratory123 laboratory1234 notebook1234 notebook12345 chemistry123 chemistry1234 counterleaf12 counterleaf123 counterleaf1234
   hydrochloric hydrochloricacid phosphoricacid citricacid12 citricacid123 sodiumhydroxide secretsecret secretpassword topsecret123`
    .split(/\s+/)
    .filter((word) => word !== ""),
);

const ROWS = [
  "abcdefghijklmnopqrstuvwxyz",
  "01234567890123456789",
  "qwertyuiopasdfghjklzxcvbnm",
  "qwertzuiopasdfghjklyxcvbnm",
];

/** What is wrong with a new password, or null. `own` are the person's name and e-mail. */
export function passwordFault(password: string, own: string[]): PasswordFault | null {
  const length = [...password].length;
  if (length < PASSWORD_LEAST) return "too-short";
  if (length > PASSWORD_MOST) return "too-long";
  const compared = password.normalize("NFKC").toLowerCase();
  const bare = compared.replace(/[\s._\-!?#*+]+/g, "");
  if (COMMON.has(compared) || COMMON.has(bare) || isRepetition(bare) || isRun(bare)) return "common";
  const words = own.flatMap((name) => name.toLowerCase().split(/[^\p{L}\p{N}]+/u)).filter((word) => word.length >= 4);
  const rest = words.reduce((left, word) => left.replaceAll(word, ""), compared);
  if ([...rest.replace(/[^\p{L}]/gu, "")].length < 4 && rest !== compared) return "own-name";
  return null;
}

/** The sentence at the field. */
export function passwordSentence(fault: PasswordFault): string {
  if (fault === "too-short")
    return `A password has at least ${PASSWORD_LEAST} characters; several words with spaces are fine.`;
  if (fault === "too-long") return `A password has at most ${PASSWORD_MOST} characters.`;
  if (fault === "own-name") return "This password is little more than your own name. Choose another.";
  return "This password is a common one and quickly guessed. Choose another.";
}

/** At most four characters (or one short word) again and again. */
function isRepetition(text: string): boolean {
  for (let unit = 1; unit <= Math.min(6, text.length / 2); unit += 1) {
    if (
      text ===
      text
        .slice(0, unit)
        .repeat(Math.ceil(text.length / unit))
        .slice(0, text.length)
    )
      return true;
  }
  return false;
}

/** Neighbours of the alphabet, of the digits or of a keyboard, in either direction. */
function isRun(text: string): boolean {
  return ROWS.some((row) => (row + row).includes(text) || [...row, ...row].reverse().join("").includes(text));
}
