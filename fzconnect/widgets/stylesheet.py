"""The workbench's own look as CSS: a light sheet of paper in every theme, and what stays in view.

The notebook's theme colours ipywidgets through variables; these are set anew inside the workbench,
because its pictures are drawn for white paper and a label that is light in a dark theme could not
be read beside them. Where the workbench is wide the head and the controls stay in view while the
pictures scroll, for which the boxes around an output must not cut off what is inside them.
"""

from __future__ import annotations

from fzconnect.views.look import FONT
from fzconnect.views.palette import ACCENT, INK, PAPER, QUIET, RULE
from fzconnect.views.strip import STRIP_STYLE

__all__ = ["SCRIPT", "STYLE"]

_EDGE = "#8A8494"  # edges of controls: 3 to 1 on paper

_THEME = f"""
.fz-workbench {{
  --jp-widgets-color: {INK}; --jp-widgets-label-color: {INK}; --jp-widgets-readout-color: {INK};
  --jp-widgets-input-color: {INK}; --jp-widgets-input-background-color: {PAPER};
  --jp-widgets-input-border-color: {_EDGE}; --jp-widgets-input-focus-border-color: {ACCENT};
  --jp-widgets-slider-handle-border-color: {ACCENT};
  --jp-widgets-slider-handle-background-color: {PAPER};
  --jp-widgets-slider-active-handle-color: {ACCENT};
  --jp-widgets-font-size: 13px; --jp-widgets-disabled-opacity: 0.75;
  --jp-ui-font-color0: {INK}; --jp-ui-font-color1: {INK}; --jp-ui-font-color2: {QUIET};
  --jp-content-font-color1: {INK}; --jp-ui-font-family: {FONT};
  --jp-layout-color0: {PAPER}; --jp-layout-color1: {PAPER}; --jp-layout-color2: #EFEDF3;
  --jp-layout-color3: #B9B3C4; --jp-layout-color4: #A29BB0;
  --jp-border-color0: {_EDGE}; --jp-border-color1: {_EDGE}; --jp-border-color2: {RULE};
  --jp-brand-color1: {ACCENT}; --jp-brand-color2: {ACCENT}; --jp-brand-color3: {ACCENT};
}}
"""

_SHEET = f"""
.fz-workbench {{container-type: inline-size; box-sizing: border-box; padding: 0 14px 12px;
  background: {PAPER}; color: {INK}; color-scheme: light; font-family: {FONT};}}
.fz-workbench.widget-box, .fz-workbench .widget-box {{overflow: visible;}}
.fz-workbench .widget-html, .fz-workbench .widget-html-content {{height: auto; min-height: 0;
  line-height: 1.35; font-family: {FONT}; color: {INK};}}
.fz-workbench .widget-html-content {{flex: 1 1 0; min-width: 0;}}
.fz-head {{background: {PAPER}; padding: 8px 0 4px; z-index: 5;}}
.fz-title {{font: 700 20px/1.3 {FONT}; color: {INK}; padding-top: 10px;}}
.fz-caution, .fz-marked, .fz-status, .fz-note {{font: 13px/1.4 {FONT}; color: {QUIET};}}
.fz-marked b {{color: {INK};}}
.fz-note p {{margin: 0 0 6px;}}
.fz-note b {{display: block; color: {INK};}}
.fz-status.fz-trouble {{color: {INK}; background: #FFF4D6; border-left: 4px solid #8A6100;
  padding: 5px 12px; font-size: 14px;}}
.fz-workbench.jupyter-widgets-disconnected::before {{
  content: "The kernel of this workbench is gone. Run the cell again to go on.";
  position: sticky; top: 0; z-index: 9; padding: 8px 12px; font: 700 14px/1.4 {FONT};
  color: {INK}; background: #FFF4D6; border-left: 4px solid #8A6100;}}
.fz-workbench .jupyter-widgets-disconnected::before {{content: none; display: none;}}
.fz-caution {{border-top: 1px solid {RULE}; padding-top: 6px; margin-top: 8px;}}
"""

_CONTROLS = f"""
.fz-controls {{gap: 2px;}}
.fz-controls .fz-fold {{width: 100%; margin: 0; padding: 0 2px; text-align: left; font-size: 14px;
  font-weight: 700; color: {INK}; background: none; border: none;
  border-top: 1px solid {RULE}; box-shadow: none;}}
.fz-controls .fz-fold i {{width: 14px; margin-right: 4px; color: {ACCENT};}}
.fz-controls .fz-folded {{padding: 0 0 8px 4px;}}
.fz-controls .widget-label {{font-family: {FONT};}}
.fz-controls .widget-hslider {{display: grid; grid-template-columns: 1fr auto; height: auto;
  align-items: center; margin: 2px;}}
.fz-controls .widget-hslider .widget-label {{width: auto !important; text-align: left;
  line-height: 20px; height: 20px;}}
.fz-controls .widget-hslider .widget-readout {{grid-area: 1 / 2; margin: 0; min-width: 3em;
  text-align: right; height: 20px; line-height: 20px; border: 1px solid {RULE}; padding: 0 6px;
  font-variant-numeric: tabular-nums;}}
.fz-controls .widget-hslider .slider-container {{grid-area: 2 / 1 / 3 / 3; height: 22px;
  margin: 0 10px; display: flex; align-items: center;}}
.fz-controls .widget-hslider .slider {{flex: 1 1 auto;}}
.fz-controls .noUi-handle {{border: 2px solid {ACCENT} !important;}}
.fz-controls .widget-dropdown .widget-label, .fz-controls .fz-folder .widget-label
  {{text-align: left;}}
.fz-controls .widget-text {{margin: 2px;}}
.fz-controls .widget-hbox .widget-text {{flex: 1 1 auto !important; min-width: 100px !important;}}
.fz-controls .widget-hbox input {{flex: 1 1 58px; min-width: 58px; width: 58px;}}
.fz-controls .widget-button:not(.fz-fold) {{background: #EFEDF3; color: {INK};
  border: 1px solid {_EDGE};}}
.fz-controls .widget-button:disabled {{color: {QUIET}; border-color: {RULE};}}
.fz-workbench :focus-visible {{outline: 3px solid {ACCENT} !important; outline-offset: 1px;}}
"""

_PLACES = """
.fz-body {gap: 14px;}
.fz-side {flex: 0 0 auto; width: 204px;}
.fz-body > .fz-side + * {flex: 1 1 0 !important; min-width: 0 !important;}
.fz-head, .fz-side {position: sticky; top: 0;}
.fz-side {top: 158px; max-height: calc(100vh - 270px); overflow-y: auto !important;}
@container (max-width: 559px) {
  .fz-body {flex-wrap: wrap !important;}
  .fz-body > .fz-side, .fz-body > .fz-side + * {flex: 1 1 100% !important;}
  .fz-head, .fz-side {position: static; max-height: none;}
}
@container (min-width: 860px) {
  .fz-side {width: 236px; top: 124px; max-height: calc(100vh - 236px);}
}
/* a notebook windowed in full moves cells about, under which sticking parts go astray */
.jp-WindowedPanel-viewport[style*="absolute"] .fz-head,
.jp-WindowedPanel-viewport[style*="absolute"] .fz-side {position: static; max-height: none;}
.jp-OutputArea:not(.jp-mod-outputsScrolled *):has(.fz-workbench),
.jp-OutputArea-child:has(.fz-workbench), .jp-OutputArea-output:has(.fz-workbench)
  {overflow: visible;}
"""

STYLE = f"<style>{_THEME}{STRIP_STYLE}{_SHEET}{_CONTROLS}{_PLACES}</style>"
"""All of it, for an HTML widget inside the workbench."""

SCRIPT = """
(function() {
  // Handles of sliders come without a name for screen readers: they get that of their label.
  let left = 120;
  const name = function() {
    for (const slider of document.querySelectorAll(".fz-workbench .widget-hslider")) {
      const words = slider.querySelector(".widget-label").textContent;
      for (const part of slider.querySelectorAll("[role=slider], .widget-readout")) {
        part.setAttribute("aria-label", words);
        if (part.getAttribute("role") !== "slider") part.setAttribute("role", "textbox");
      }
    }
    if (--left) setTimeout(name, 500);
  };
  name();
  // Arrows and letters belong to the menu or slider that has the focus, not to the notebook, which
  // would go to another cell or cut this one. Keys with Ctrl, Alt or Cmd stay the notebook's.
  if (window.fzconnect_keys) return;
  window.fzconnect_keys = true;
  window.addEventListener("keydown", function(event) {
    const at = event.target, isOurs = !(event.ctrlKey || event.metaKey || event.altKey);
    if (!(at instanceof Element && at.closest(".fz-workbench"))) return;
    at.toggleAttribute("data-lm-suppress-shortcuts", isOurs);
  }, true);
})();
"""
"""JavaScript for a workbench that is about to appear: what only the browser's side can do."""
