import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { expect, test, vi } from 'vitest';
import type { RememberedMapping } from '../../../../shared/api/visit-log-mapping.ts';
import type { VisitReport } from '../../../../shared/domain/visit-report.ts';
import { AcceptForm, offerAnswers } from '../../../../src/features/visit-logs/AcceptForm.tsx';

/** 2026-11-30T10:15:00Z */
const last = 1_796_033_700;
const now = last + 7200;
const report: VisitReport = {
  rows: 100,
  goodRows: 90,
  problemRows: 10,
  problems: [{ problem: 'area unknown', column: 'care_area', rows: 10, examples: [3] }],
  identicalRows: 0,
  firstArrivalAt: last - 86_400,
  lastArrivalAt: last,
  lastTimeAt: last,
  visitsByArea: [{ area: 0, visits: 90 }],
  recorded: { departure: 80, bedSpace: 0, admissionDecision: 0, disposition: 90, byAmbulance: 90 },
};

function show(more: Partial<VisitReport> = {}, remembered: RememberedMapping | null = null) {
  const onAccept = vi.fn();
  function Page() {
    const [answers, setAnswers] = useState(() => offerAnswers(remembered));
    return (
      <AcceptForm
        report={{ ...report, ...more }}
        timeZone="Europe/London"
        now={now}
        fileDate={last + 3600}
        remembered={remembered}
        answers={answers}
        onAnswer={(changed) => {
          setAnswers((before) => ({ ...before, ...changed }));
        }}
        onAccept={onAccept}
      />
    );
  }
  render(<Page />);
  return { onAccept, user: userEvent.setup(), send: screen.getByRole('button', { name: /^Send and load/ }) };
}

test('nothing is sent before every question is answered, and each says so', async () => {
  const { onAccept, user, send } = show();
  await user.click(send);
  expect(onAccept).not.toHaveBeenCalled();
  expect(screen.getAllByRole('alert').map((alert) => alert.textContent)).toEqual([
    'Choose one.',
    'Choose one.',
    'Choose one.',
    'Choose one.',
    'Tick this, or correct the file and choose it again.',
  ]);
});

test('the answers are sent as they were given; the file’s own date is the first guess for the extract', async () => {
  const { onAccept, user, send } = show();
  await user.click(screen.getByLabelText('Those that arrived in its period'));
  await user.click(screen.getByLabelText('The patient registered at the desk'));
  await user.click(screen.getByLabelText('The first area'));
  await user.click(screen.getByLabelText(/still present when/));
  await user.click(screen.getByLabelText('Load the 90 good rows and leave out 10 problem rows'));
  await user.click(send);
  expect(onAccept).toHaveBeenCalledWith(
    {
      selectedBy: 'arrived',
      takenAt: last + 3600,
      missingDeparture: 'still present',
      arrivalMeaning: 'registration',
      areaMeaning: 'first',
    },
    true,
  );
});

test('an extract taken before its last time is refused', async () => {
  const { onAccept, user, send } = show({ problemRows: 0, recorded: { ...report.recorded, departure: 90 } });
  await user.click(screen.getByLabelText(/Those that departed/));
  await user.click(screen.getByLabelText('The patient registered at the desk'));
  await user.click(screen.getByLabelText('The last area'));
  const field = screen.getByLabelText('When was the extract taken?');
  await user.clear(field);
  await user.type(field, '2026-11-30T09:00');
  await user.click(send);
  expect(onAccept).not.toHaveBeenCalled();
  expect(screen.getByRole('alert').textContent).toBe('Not before the last time in the file, 30 Nov 2026, 10:15.');
  expect(screen.queryByText(/missing departure/)).toBeNull();
});

const remembered: RememberedMapping = {
  columns: {
    arrival_at: 'Arrival',
    bed_space_at: null,
    admission_decision_at: null,
    departure_at: 'Left',
    care_area: 'Unit',
    disposition: null,
    arrived_by_ambulance: null,
  },
  dateOrder: null,
  repeatedHour: 'refuse',
  areas: [],
  dispositions: [],
  ambulances: [],
  selectedBy: 'departed',
  missingDeparture: 'unknown',
  arrivalMeaning: 'offload',
  areaMeaning: 'longest',
};

test('the answers of the last file are there already; one that changes says what it was', async () => {
  const { onAccept, user, send } = show({ problemRows: 0 }, remembered);
  expect(screen.queryByText(/The last file said/)).toBeNull();
  await user.click(screen.getByLabelText('The patient registered at the desk'));
  expect(screen.getByText(/^The last file said: The patient handed over by the ambulance crew/)).toBeInTheDocument();
  await user.click(send);
  expect(onAccept).toHaveBeenCalledWith(
    {
      selectedBy: 'departed',
      takenAt: last + 3600,
      missingDeparture: 'unknown',
      arrivalMeaning: 'registration',
      areaMeaning: 'longest',
    },
    true,
  );
});
