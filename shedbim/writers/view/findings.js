// The list of findings: each line flies to its place and selects its pieces. Hidden when there are none.

function createFindings(model, state, stage, say) {
  const tab = byId('tab-findings');
  tab.hidden = model.findings.length === 0;
  if (tab.hidden) return;
  tab.textContent = `Findings ${model.findings.length}`;
  const order = (finding) => SEVERITIES.indexOf(finding.severity);
  const sorted = [...model.findings].sort((a, b) => order(a) - order(b));
  byId('findings').append(
    ...sorted.map((finding) =>
      element(
        'li',
        {},
        element(
          'button',
          {
            type: 'button',
            class: 'finding',
            data: { severity: finding.severity, code: finding.code },
            onclick: () => fly(finding),
          },
          element('span', { class: 'severity' }, finding.severity),
          ' ',
          element('span', { class: 'code' }, finding.code),
          element('span', { class: 'text' }, finding.text),
        ),
      ),
    ),
  );

  // A ring stands at the place of the finding until something else is selected.
  const ring = element('div', { class: 'place-ring', id: 'place-ring', hidden: true });
  byId('labels').append(ring);
  let place = null;
  state.on('selection', () => {
    place = null;
  });
  stage.onDraw(() => {
    const at = place && stage.camera.project(place);
    ring.hidden = !at || at[2] <= 0;
    if (!ring.hidden) pin(ring, at[0], at[1]);
  });

  function fly(finding) {
    const hidden = finding.pieces.filter((piece) => !state.shown[piece]);
    if (hidden.length) state.show(hidden);
    state.select(finding.pieces);
    place = sub(finding.point, model.middle);
    stage.flyTo(place);
    say(`${finding.severity} ${finding.code}: ${finding.text}`);
  }
}
