/** The stand-in's own plain look: a workshop, not a shop. One file, no scripts, no fonts to fetch. */
export const STYLE = `
:root { color-scheme: light; --ink: #1d2430; --soft: #5a6372; --line: #c9cfd8; --paper: #ffffff; --ground: #eef0f3;
  --deep: #23405c; --bad: #a3211b; --badground: #fdf0ef; }
* { box-sizing: border-box; }
body { margin: 0; background: var(--ground); color: var(--ink); font: 16px/1.5 system-ui, sans-serif; }
.banner { margin: 0; padding: 10px 16px; background: #ffdf7e; color: #3d2f00; font-weight: 600; text-align: center;
  border-bottom: 3px dashed #8a6d00; }
main { max-width: 920px; margin: 0 auto; padding: 24px 16px 48px; display: grid; gap: 24px; }
@media (min-width: 780px) { main { grid-template-columns: 1fr 1fr; align-items: start; padding-top: 48px; } }
section { background: var(--paper); border: 1px solid var(--line); padding: 24px 20px; min-width: 0; }
h1, h2 { margin: 0 0 16px; font-size: 1.25rem; line-height: 1.3; }
a { color: var(--deep); }
table { width: 100%; border-collapse: collapse; }
td, th { padding: 8px 0; border-bottom: 1px solid var(--line); text-align: left; font-weight: 400; vertical-align: top;
  overflow-wrap: anywhere; }
td { padding-left: 12px; text-align: right; white-space: nowrap; font-variant-numeric: tabular-nums; }
tfoot th, tfoot td { border: 0; font-weight: 700; font-size: 1.125rem; }
.quantity { color: var(--soft); }
.field { margin: 0 0 16px; }
.pair { display: grid; grid-template-columns: 1fr 1fr; gap: 16px; }
label { display: block; margin-bottom: 4px; font-weight: 600; }
input { width: 100%; padding: 10px 12px; font: inherit; color: inherit; background: #fff; border: 1px solid #7a8494;
  border-radius: 0; min-height: 46px; }
input[aria-invalid="true"] { border-color: var(--bad); border-width: 2px; }
:focus-visible { outline: 3px solid #2f7fc1; outline-offset: 2px; }
.wrong { margin: 4px 0 0; color: var(--bad); font-size: .9375rem; }
.alert { margin: 0 0 16px; padding: 12px; background: var(--badground); border-left: 4px solid var(--bad); color: var(--bad); }
button { width: 100%; min-height: 48px; padding: 10px 16px; font: inherit; font-weight: 700; color: #fff;
  background: var(--deep); border: 2px solid var(--deep); border-radius: 0; cursor: pointer; }
button.second { background: #fff; color: var(--deep); }
button + button { margin-top: 12px; }
details { margin-top: 20px; color: var(--soft); font-size: .9375rem; }
summary { cursor: pointer; }
dl { margin: 8px 0 0; }
dt { font-family: ui-monospace, monospace; color: var(--ink); }
dd { margin: 0 0 6px; }
`;
