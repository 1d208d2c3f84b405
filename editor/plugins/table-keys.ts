// Tab goes from cell to cell. The tables of a page are plain: no merged cells, no dragged columns, and nothing that would mend
// them in every browser at once.
import { Extension } from "@tiptap/core";
import { addRowAfter, goToNextCell, isInTable } from "@tiptap/pm/tables";

export const TableKeys = Extension.create({
  name: "tableKeys",
  addKeyboardShortcuts() {
    const go = (direction: 1 | -1) => () => {
      const { editor } = this;
      if (!isInTable(editor.state)) return false;
      if (goToNextCell(direction)(editor.state, editor.view.dispatch)) return true;
      if (direction === -1) return false;
      addRowAfter(editor.state, editor.view.dispatch);
      return goToNextCell(1)(editor.state, editor.view.dispatch);
    };
    return { Tab: go(1), "Shift-Tab": go(-1) };
  },
});
