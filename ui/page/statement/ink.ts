// How the text of a statement looks: face, measure and colours, shared by statements that stand still and by the editor, so that nothing moves
// and nothing changes colour when a hand goes into one. The document and the editor's shadow root adopt the same sheet.

import { css } from "lit"

/** Lines are `.line` where they stand still and `.cm-line` in the editor; those of a note are told by their kind. */
export const ink = css`
  .line,
  .cm-editor .cm-line {
    padding: 0 0 0 5ch;
    font: 13px / 21px var(--mono-face);
    text-indent: -5ch;
    white-space: pre-wrap;
    overflow-wrap: break-word;
    tab-size: 2;
  }

  /* A note is prose: it reads in the face of prose, even while it is written. */
  .kind-note .line + .line,
  .cm-editor.is-note .cm-line + .cm-line {
    padding-left: 0;
    color: var(--soft);
    font-family: var(--text-face);
    text-indent: 0;
  }

  .m-kind {
    font-weight: 700;
  }

  .m-off {
    color: var(--soft);
    font-style: italic;
  }

  .m-keyword,
  .m-word {
    color: var(--soft);
  }

  .m-number {
    color: light-dark(#1d5b6b, #8fcbd8);
  }

  .m-text {
    color: light-dark(#67501f, #d6bd84);
  }

  .m-sign {
    color: var(--soft);
  }

  .m-call {
    font-style: italic;
  }

  .m-comment {
    color: light-dark(#6b6f5d, #98a086);
    font-style: italic;
  }

  .m-stray {
    color: var(--fault);
  }

  .m-live {
    color: light-dark(#1d5b6b, #8fcbd8);
  }

  .m-title {
    font-weight: 700;
  }

  .wrong,
  .cm-editor .cm-lintRange {
    background-image: none;
    text-decoration: underline wavy 1px var(--faint);
    text-decoration-skip-ink: none;
    text-underline-offset: 4px;
  }

  .wrong.fault,
  .cm-editor .cm-lintRange-error {
    text-decoration-color: var(--fault);
  }

  .wrong.warning,
  .cm-editor .cm-lintRange-warning {
    text-decoration-color: var(--warn);
  }

  .wrong.remark,
  .cm-editor .cm-lintRange-info {
    text-decoration-style: dotted;
  }
`

/** What the editor has besides: caret, completions, what is said at a place. */
export const editorInk = css`
  .cm-editor {
    background: none;
  }

  .cm-editor.cm-focused {
    outline: none;
  }

  .cm-editor .cm-scroller {
    overflow: visible;
    font: 13px / 21px var(--mono-face);
  }

  .cm-editor .cm-content {
    padding: 0;
    caret-color: var(--accent);
  }

  .cm-editor .cm-lintPoint::after {
    border-bottom-color: var(--fault);
  }

  .cm-editor .cm-tooltip {
    background: var(--sheet);
    border: 1px solid var(--line);
    border-radius: 4px;
    box-shadow: 0 6px 24px rgb(0 0 0 / 12%);
    color: var(--ink);
  }

  .cm-editor .cm-tooltip.cm-tooltip-autocomplete > ul {
    max-width: min(520px, 92vw);
    max-height: 260px;
    padding: 4px 0;
    font: 13px / 1.5 var(--text-face);
  }

  .cm-editor .cm-tooltip.cm-tooltip-autocomplete > ul > li {
    display: flex;
    gap: 14px;
    align-items: baseline;
    padding: 2px 14px;
  }

  .cm-editor .cm-tooltip.cm-tooltip-autocomplete > ul > li[aria-selected] {
    background: var(--tint);
    box-shadow: inset 2px 0 0 var(--accent);
    color: var(--ink);
  }

  .cm-editor .cm-completionLabel {
    flex: none;
    font-family: var(--mono-face);
  }

  .cm-editor .cm-completionMatchedText {
    font-weight: 700;
    text-decoration: none;
  }

  .cm-editor .cm-completionDetail {
    min-width: 0;
    margin: 0;
    overflow: hidden;
    color: var(--soft);
    font-style: normal;
    font-size: 12.5px;
    text-overflow: ellipsis;
  }

  /* The line of help of the one that is chosen is there whole. */
  .cm-editor li[aria-selected] .cm-completionDetail {
    white-space: normal;
  }

  .cm-editor .cm-diagnostic {
    max-width: 460px;
    padding: 6px 12px;
    border-left: 3px solid var(--fault);
    font: 13px / 1.5 var(--text-face);
  }

  .cm-editor .cm-diagnostic-warning {
    border-left-color: var(--warn);
  }

  .cm-editor .cm-diagnostic-info {
    border-left-color: var(--line);
  }

  .cm-editor .cm-diagnosticAction {
    margin: 0 0 0 8px;
    padding: 0;
    background: none;
    border: 0;
    border-bottom: 1.5px solid var(--accent);
    color: var(--accent);
    font: inherit;
  }
`
