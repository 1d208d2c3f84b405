// The tables that the sign-in library writes, under the names by which it asks for them.
import { account, session, user, verification } from "./schema/people.ts";

/** For the library's Drizzle adapter: `schema: authTables`. Roles and memberships are not among them: they are our own. */
export const authTables = { user, session, account, verification };
