/** Two sheets compared: the other one's curve over this one, and every field in which they differ. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { where } from "../format/where";
import { Refused } from "../bridge/failures";
import { Icon } from "../parts/icon";
import { compared, differences } from "../state/compare";
import { versions } from "../state/store";
import { sheet } from "../state/sheet";
import { ask } from "../state/work";

/** The part of the sheet room. */
export function Compare(): JSX.Element {
  const told = useSignal("");
  const take = async (text: string, name: string): Promise<void> => {
    try {
      const { body } = await ask({ kind: "open", text });
      if (body.kind === "sheet") compared.value = { sheet: body.sheet, name };
      told.value = "";
    } catch (reason) {
      told.value = reason instanceof Refused ? `Not read: ${reason.message}` : String(reason);
    }
  };
  const other = compared.value;
  return (
    <fieldset>
      <legend>Compare with another sheet</legend>
      <p class="problem" role="status">
        {told.value}
      </p>
      {other === null ? (
        <div class="buttons">
          <label class="button">
            <Icon name="file" /> A file
            <input
              class="unseen"
              type="file"
              accept=".json,application/json"
              onChange={(event) => {
                const file = event.currentTarget.files?.[0];
                event.currentTarget.value = "";
                void file?.text().then((text) => take(text, file.name));
              }}
            />
          </label>
          {versions.value.length > 1 && (
            <label>
              <span class="unseen">A version in this browser</span>
              <select
                class="theme"
                value=""
                onChange={(event) => {
                  const version = versions.peek()[Number(event.currentTarget.value)];
                  if (version) void take(version.text, new Date(version.at).toLocaleString(undefined, { hourCycle: "h23" }));
                }}
              >
                <option value="">A version…</option>
                {versions.value.slice(1, 30).map((version, i) => (
                  <option key={version.key} value={i + 1}>
                    {new Date(version.at).toLocaleString(undefined, { hourCycle: "h23" })}
                  </option>
                ))}
              </select>
            </label>
          )}
        </div>
      ) : (
        <Differences name={other.name} there={other.sheet} />
      )}
    </fieldset>
  );
}

function Differences({ name, there }: { name: string; there: unknown }): JSX.Element {
  const found = differences(sheet.value, there);
  return (
    <>
      <p class="note">Its observed curve is drawn as a thin grey line.</p>
      <div class="table-box table-box-short" tabIndex={0} role="region" aria-label="Differences">
        <table class="plain">
          <thead>
            <tr>
              <th scope="col">Field</th>
              <th scope="col">here</th>
              <th scope="col">{name}</th>
            </tr>
          </thead>
          <tbody>
            {found.map((difference) => (
              <tr key={difference.path}>
                <th scope="row">{where(difference.path)}</th>
                <td>{difference.here || <span class="quiet">none</span>}</td>
                <td>{difference.there || <span class="quiet">none</span>}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <p class="note">{found.length === 0 ? "They are the same." : found.length === 60 ? "The first 60 differences." : ""}</p>
      <button type="button" class="button" onClick={() => (compared.value = null)}>
        Stop comparing
      </button>
    </>
  );
}
