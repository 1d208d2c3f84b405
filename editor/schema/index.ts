// The door of the page schema: headless, runs in the browser and on the server.
export { canonicalInputs, canonicalText, type LibraryCompound, type LibrarySlice } from "./canonical.ts";
export {
  blockName,
  blocksOf,
  type Derived,
  deriveFrom,
  derivePage,
  type Occurrence,
  type TypedValue,
} from "./derive.ts";
export {
  ACTIVITY_CHOICES,
  AMOUNT_UNITS,
  type AmountUnit,
  blockId,
  blockOfNode,
  type CompositionRow,
  compositionRow,
  compoundId,
  type EquilibriumBlock,
  equilibriumBlock,
  MOST_ROWS_SOLVED,
  VOLUME_UNITS,
} from "./equilibrium.ts";
export { isLinkAllowed } from "./marks.ts";
export { extensionsOfPage, pageExtensions, pageSchema } from "./nodes.ts";
export {
  EMPTY_HEAD,
  PAGE_LIMITS,
  type PageHead,
  type PageJson,
  type PageMark,
  type PageNode,
  textAttribute,
} from "./page.ts";
export { copyState, openState, seedPage, stateOfPage } from "./state.ts";
export { isDateOrBlank, parsePage, type Validated, validatePage } from "./validate.ts";
