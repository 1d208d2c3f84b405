"use client";
import { zodResolver } from "@hookform/resolvers/zod";
import { useRouter } from "next/navigation";
import { Controller, useForm } from "react-hook-form";
import type { z } from "zod";
import { Button } from "../../../../components/ui/button.tsx";
import { Says } from "../../../../components/ui/says.tsx";
import { SelectField } from "../../../../components/ui/select-field.tsx";
import { type Answered, showProblem } from "../../../_components/answered.ts";
import { preferences } from "../schema.ts";

type Form = z.infer<typeof preferences>;
type Props = Form & { zones: string[]; save: (raw: unknown) => Promise<Answered<unknown>> };

export function PreferencesForm({ decimalSign, timeZone, zones, save }: Props) {
  const router = useRouter();
  const form = useForm<Form>({ resolver: zodResolver(preferences), defaultValues: { decimalSign, timeZone } });
  const { errors, isSubmitting, isSubmitSuccessful, isDirty } = form.formState;
  const submit = form.handleSubmit(async (values) => {
    const answered = await save(values);
    if (!answered.ok) return showProblem(form, answered.problem, ["decimalSign", "timeZone"]);
    form.reset(values, { keepIsSubmitSuccessful: true });
    router.refresh();
  });
  return (
    <form className="sign" onSubmit={submit} noValidate>
      {errors.root ? (
        <Says kind="stop" urgent>
          {errors.root.message}
        </Says>
      ) : null}
      <Controller
        control={form.control}
        name="decimalSign"
        render={({ field }) => (
          <SelectField
            label="Decimal sign"
            hint="How you write a number with a fraction. What could be read as a thousandfold is asked about."
            choices={[
              { value: ".", label: "point, 0.100" },
              { value: ",", label: "comma, 0,100" },
            ]}
            error={errors.decimalSign?.message}
            {...field}
          />
        )}
      />
      <Controller
        control={form.control}
        name="timeZone"
        render={({ field }) => (
          <SelectField
            label="Time zone"
            choices={zones.map((zone) => ({ value: zone, label: zone }))}
            error={errors.timeZone?.message}
            {...field}
          />
        )}
      />
      <Button type="submit" pending={isSubmitting} pendingWords="Keeping them">
        Keep these
      </Button>
      {isSubmitSuccessful && !isDirty && Object.keys(errors).length === 0 ? (
        <Says kind="good" finding="Kept." urgent />
      ) : null}
    </form>
  );
}
