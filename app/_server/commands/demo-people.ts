// Who is in the demo, with their passwords: invented people of an invented laboratory.
import "server-only";
import people from "../../../db/seed/demo-people.json" with { type: "json" };

const widest = Math.max(...people.map((person) => person.email.length));
for (const person of people) {
  process.stdout.write(
    `  ${person.email.padEnd(widest)}  ${person.password.padEnd(24)}${person.printedName}, ${person.about}\n`,
  );
}
