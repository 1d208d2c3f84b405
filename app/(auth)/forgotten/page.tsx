import type { Metadata } from "next";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { ForgottenForm } from "./_components/forgotten-form.tsx";
import { askForLink } from "./actions.ts";

export const metadata: Metadata = { title: "Forgotten password" };

export default function ForgottenPage() {
  return (
    <Leaf className="small">
      <LeafTitle under="A link to choose a new one goes to your e-mail. It works once, for an hour.">
        Forgotten password
      </LeafTitle>
      <ForgottenForm ask={askForLink} />
    </Leaf>
  );
}
