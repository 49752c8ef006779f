import { useRef, useState } from 'react';
import { Link } from 'react-router-dom';
import { visitLogLimits } from '../../../shared/api/visit-logs.ts';
import { canonicalHeader } from '../../../shared/domain/canonical-visit.ts';
import { Button } from '../../components/Button.tsx';
import { classNames } from '../../lib/class-names.ts';
import { formatNumber } from '../../lib/format.ts';

/** First step: a file is chosen or dropped. Nothing of it is sent yet. */
export function ChooseFile({ guideHref, onChoose }: { guideHref: string; onChoose: (file: File) => void }) {
  const inputRef = useRef<HTMLInputElement>(null);
  const [over, setOver] = useState(false);
  return (
    <div className="grid max-w-[58rem] gap-6">
      <div
        className={classNames(
          'grid justify-items-start gap-3 border-l-4 py-3 pl-4',
          over ? 'border-act bg-act-soft' : 'border-edge',
        )}
        onDragOver={(event) => {
          event.preventDefault();
          setOver(true);
        }}
        onDragLeave={() => {
          setOver(false);
        }}
        onDrop={(event) => {
          event.preventDefault();
          setOver(false);
          const file = event.dataTransfer.files.item(0);
          if (file) onChoose(file);
        }}
      >
        <input
          ref={inputRef}
          id="visit-log-file"
          type="file"
          className="sr-only"
          tabIndex={-1}
          aria-label="Visit log file"
          accept=".csv,.tsv,.txt,.gz,.xlsx,.ndjson,.jsonl,text/csv,text/plain,application/gzip,application/fhir+ndjson,application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"
          onChange={(event) => {
            const file = event.target.files?.item(0);
            if (file) onChoose(file);
            event.target.value = '';
          }}
        />
        <Button onClick={() => inputRef.current?.click()}>Choose a file</Button>
        <p className="text-ink2">
          or drop it here. CSV with any separator, gzipped or not; the first sheet of an .xlsx workbook; or HL7 FHIR R4
          Encounters, one a line (NDJSON). One row a visit; or, where times may not be shared, one row an hour and care
          area. Up to {formatNumber(visitLogLimits.bytes / 1e6)} MB of text to send.
        </p>
      </div>
      <div className="prose-column">
        <h2 className="text-h2">What leaves this computer</h2>
        <p>
          The file is read here, in the browser. Only arrival, bed-space, admission-decision and departure times, care
          area, disposition and arrival by ambulance are sent, and only after you have seen the check. Every other
          column is dropped. Names, numbers, addresses and the like are looked for first, here and again on the server;
          a file that holds them is refused and not kept.
        </p>
        <p>
          Times to the minute can identify people under some rules (in the United States they make a limited data set,
          45 CFR 164.514(e)). Follow your data-sharing agreement.
        </p>
        <details>
          <summary className="link inline-block min-h-6 cursor-pointer font-bold text-ink">
            Columns, if you can choose them
          </summary>
          <p>One row a visit. A file that has these headers needs no mapping:</p>
          <p className="overflow-x-auto bg-paper px-3 py-2 font-semibold text-ink">
            <code className="font-sans">{canonicalHeader}</code>
          </p>
          <ul>
            <li>Times in ISO 8601, with Z or an offset; empty where not recorded. Arrival is needed.</li>
            <li>Care area by its name at this site. It is needed.</li>
            <li>Disposition: home, admitted, transferred, left before treatment, or empty.</li>
            <li>Arrived by ambulance: yes, no, or empty.</li>
          </ul>
          <p>
            <Link to={guideHref} className="link font-semibold">
              Columns, formats and a template
            </Link>
          </p>
        </details>
      </div>
    </div>
  );
}
