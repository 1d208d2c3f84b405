"use client";
// The equilibrium block in the editor: inputs that are entered field by field, the server's answer below, the earlier one held while
// a new one is on its way.
import type { Node } from "@tiptap/pm/model";
import type { Command } from "@tiptap/pm/state";
import { type NodeViewProps, NodeViewWrapper, useEditorState } from "@tiptap/react";
import { BlockResult } from "../../components/chem/block-result.tsx";
import { SideRow } from "../../components/leaf/side-row.tsx";
import { Button } from "../../components/ui/button.tsx";
import { FieldError } from "../../components/ui/field-parts.tsx";
import { ChoiceField } from "../choice-field.tsx";
import { addRow, moveRow, removeBlock, setBlockField, setRowFields, takeOutRow } from "../commands/block.ts";
import { EnteredNumber, EnteredText } from "../entered-text.tsx";
import { usePage } from "../page-context.tsx";
import { Hazards } from "../read/hazards.tsx";
import { blockOfNode, type EquilibriumBlock, type PageNode, VOLUME_UNITS } from "../schema/index.ts";
import { newName } from "../tabs.ts";
import { useAnswer } from "./answer.ts";
import { BlockVouch } from "./block-vouch.tsx";
import { Composition } from "./composition.tsx";
import { fieldErrors } from "./refusals.ts";

const ACTIVITY_CHOICES = [
  { value: "davies", label: "Davies, to about 0.5 mol/L" },
  { value: "ideal", label: "Ideal, all activity coefficients 1" },
] as const;

export function EquilibriumView({ editor, node, getPos, selected }: NodeViewProps) {
  const { decimalSign } = usePage();
  const block = readBlock(node);
  const answer = useAnswer(block);
  const number = useEditorState({
    editor,
    selector: ({ editor: current }) => numberOf(current.state.doc, getPos()),
  });
  const errors = fieldErrors(answer.refusals);
  const run = (command: Command) => command(editor.state, editor.view.dispatch);
  const { id } = block;
  const solved = answer.shown;
  return (
    <NodeViewWrapper
      as="section"
      className={answer.isHeld ? "eq is-held" : "eq"}
      aria-label={`Equilibrium block E${number}`}
      contentEditable={false}
      data-selected={selected}
    >
      <BlockVouch block={block} number={number} answer={answer} />
      <header className="eq-head">
        <h2 className="tag-id">E{number}</h2>
        <div className="eq-title">
          <EnteredText
            field={`block ${id} title`}
            label={`Title of E${number}`}
            value={block.title}
            most={200}
            onEnter={(title) => run(setBlockField(id, "title", title))}
          />
        </div>
        <span className="note" role="status">
          {answer.words}
        </span>
        <span className="acts">
          <Button
            kind="quiet-stop"
            onClick={() => {
              run(removeBlock(id));
              editor.commands.focus();
            }}
          >
            Take the block off the page
          </Button>
        </span>
      </header>
      <SideRow level={3} label="Composition" note={countOf(block.rows.length)} first long>
        <Composition
          rows={block.rows}
          errors={errors}
          concentrations={solved?.value.composition ?? []}
          isHeld={answer.isHeld}
          onSet={(rowId, values) => run(setRowFields(id, rowId, values))}
          onAdd={() => {
            const rowId = newName();
            run(addRow(id, rowId));
            return rowId;
          }}
          onMove={(rowId, by) => run(moveRow(id, rowId, by))}
          onTakeOut={(rowId) => run(takeOutRow(id, rowId))}
        />
      </SideRow>
      <SideRow level={3} label="Volume">
        <div className="row-of">
          <EnteredNumber
            field={`block ${id} volume`}
            label="Made up to"
            value={block.volume}
            decimalSign={decimalSign}
            unit={block.volumeUnit}
            error={errors.block("volume")}
            refuse={(decimal) => (decimal.startsWith("-") ? "A volume is above zero." : undefined)}
            onCommit={(volume) => run(setBlockField(id, "volume", volume))}
          />
          <ChoiceField
            label="Unit of the volume"
            choices={VOLUME_UNITS.map((unit) => ({ value: unit, label: unit }))}
            value={block.volumeUnit}
            onChange={(unit) => run(setBlockField(id, "volumeUnit", unit))}
          />
        </div>
      </SideRow>
      <SideRow level={3} label="Conditions">
        <div className="row-of">
          <dl className="facts">
            <div>
              <dt>Temperature</dt>
              <dd>{block.temperatureC.replace(".", decimalSign)} °C</dd>
            </div>
          </dl>
          <ChoiceField
            label="Activity model"
            choices={ACTIVITY_CHOICES}
            value={block.activity}
            onChange={(activity) => run(setBlockField(id, "activity", activity))}
          />
          <EnteredNumber
            field={`block ${id} measuredPH`}
            label="Measured pH"
            aside="by the meter"
            value={block.measuredPH}
            decimalSign={decimalSign}
            error={errors.block("measuredPH")}
            onCommit={(measuredPH) => run(setBlockField(id, "measuredPH", measuredPH))}
          />
        </div>
        {errors.block("temperature") === undefined ? null : <FieldError>{errors.block("temperature")}</FieldError>}
      </SideRow>
      {block.rows.length === 0 ? null : (
        <>
          <BlockResult
            solved={solved?.value ?? null}
            warnings={solved?.warnings ?? []}
            sweeps={answer.sweeps}
            cautions={answer.cautions}
            held={answer.isHeld}
            stillSolving={answer.isSlow}
            refusals={answer.refusals}
            measuredText={block.measuredPH === "" ? undefined : block.measuredPH}
            name={block.title === "" ? `E${number}` : block.title}
          />
          <Hazards hazards={answer.hazards} />
        </>
      )}
    </NodeViewWrapper>
  );
}

function readBlock(node: Node): EquilibriumBlock {
  const page: PageNode = node.toJSON();
  return blockOfNode(page);
}

/** Blocks are numbered in the order of the page. */
function numberOf(doc: Node, pos: number | undefined): number {
  let number = 1;
  doc.descendants((node, at) => {
    if (node.type.name === "equilibrium" && pos !== undefined && at < pos) number += 1;
    return node.type.name !== "equilibrium";
  });
  return number;
}

function countOf(rows: number): string {
  return rows === 1 ? "1 row" : `${rows} rows`;
}
