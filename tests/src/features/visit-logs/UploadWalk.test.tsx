import { Blob as NodeBlob } from 'node:buffer';
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter } from 'react-router-dom';
import { afterEach, beforeEach, expect, test, vi } from 'vitest';
import { ApiError } from '../../../../src/lib/api-error.ts';
import { checkFile } from '../../../../src/features/visit-logs/check-file.ts';
import { sendFile } from '../../../../src/features/visit-logs/send-file.ts';
import { surveyFile } from '../../../../src/features/visit-logs/survey-file.ts';
import { UploadWalk } from '../../../../src/features/visit-logs/UploadWalk.tsx';

// jsdom has neither threads nor XMLHttpRequest's progress: the file is read here, and sending is the test's.
vi.mock('../../../../src/features/visit-logs/send-file.ts', () => ({ sendFile: vi.fn() }));
vi.mock('../../../../src/features/visit-logs/file-reader-thread.ts', () => ({
  surveyOnThread: vi.fn(),
  checkOnThread: vi.fn(),
}));
const thread = await import('../../../../src/features/visit-logs/file-reader-thread.ts');

/** 2026-12-01T00:00:00Z */
const now = 1_796_083_200;
const csv = [
  'Arrival,Left,Unit,Outcome',
  '2026-03-01 10:00,2026-03-01 12:00,Acute,Home',
  '2026-03-01 11:00,,ACUTE,Home',
  '2026-03-01 12:00,2026-03-01 10:00,acute,Home',
].join('\n');

beforeEach(() => {
  window.scrollTo = () => undefined;
  // jsdom's own Blob cannot be read as a stream.
  const blob = new NodeBlob([csv]) as Blob;
  vi.mocked(thread.surveyOnThread).mockImplementation((_, known, at) =>
    surveyFile(blob, new Set(known), at, () => undefined),
  );
  vi.mocked(thread.checkOnThread).mockImplementation((_, settings) => checkFile(blob, settings, () => undefined));
});
afterEach(() => {
  vi.mocked(sendFile).mockReset();
});

async function walkToForm() {
  const user = userEvent.setup();
  render(
    <QueryClientProvider client={new QueryClient()}>
      <MemoryRouter>
        <UploadWalk
          siteId="site"
          areas={[{ id: 'area-acute', name: 'Acute' }]}
          timeZone="Europe/London"
          now={now}
          last={null}
          shiftEnds={[]}
          logs={[]}
          aside={null}
          guideHref="/guide"
          onAccepted={() => undefined}
        />
      </MemoryRouter>
    </QueryClientProvider>,
  );
  await user.upload(screen.getByLabelText('Visit log file'), new File([csv], 'march.csv', { type: 'text/csv' }));
  await user.click(await screen.findByRole('button', { name: 'Check 3 rows' }));
  await screen.findByLabelText('Those that arrived in its period');
  return user;
}

async function answer(user: ReturnType<typeof userEvent.setup>) {
  await user.click(screen.getByLabelText('Those that arrived in its period'));
  await user.click(screen.getByLabelText('The patient registered at the desk'));
  await user.click(screen.getByLabelText('The first area'));
  await user.click(screen.getByLabelText(/still present when/));
  await user.click(screen.getByLabelText(/^Load the 2 good rows/));
  const taken = screen.getByLabelText('When was the extract taken?');
  await user.clear(taken);
  await user.type(taken, '2026-03-02T08:30');
}

function expectAnswersKept() {
  for (const label of [
    'Those that arrived in its period',
    'The patient registered at the desk',
    'The first area',
    /still present when/,
    /^Load the 2 good rows/,
  ])
    expect(screen.getByLabelText(label)).toBeChecked();
  expect(screen.getByLabelText('When was the extract taken?')).toHaveValue('2026-03-02T08:30');
}

test('a send that is cancelled keeps every answer', async () => {
  vi.mocked(sendFile).mockImplementation(
    (_site, _name, _payload, signal) =>
      new Promise((_resolve, reject) => {
        signal.addEventListener('abort', () => {
          reject(new Error('cancelled'));
        });
      }),
  );
  const user = await walkToForm();
  await answer(user);
  await user.click(screen.getByRole('button', { name: 'Send and load 2 visits' }));
  await user.click(await screen.findByRole('button', { name: 'Cancel' }));
  await screen.findByLabelText('The first area');
  expectAnswersKept();
});

test('a send that fails says so and keeps every answer; a new check asks again only what is left out', async () => {
  vi.mocked(sendFile).mockRejectedValue(
    new ApiError({
      type: 'about:blank',
      status: 0,
      title: 'The server cannot be reached',
      detail: '',
      kept: '',
      next: '',
    }),
  );
  const user = await walkToForm();
  await answer(user);
  await user.click(screen.getByRole('button', { name: 'Send and load 2 visits' }));
  expect(await screen.findByRole('alert')).toHaveTextContent('The server cannot be reached');
  expectAnswersKept();

  await user.click(screen.getByRole('button', { name: 'Back to the columns' }));
  // Three spellings of one area are one question.
  expect(screen.getByLabelText('Care areas: “Acute” means')).toHaveValue('area-acute');
  expect(screen.getByText('also written “ACUTE”, “acute”')).toBeInTheDocument();
  await user.click(screen.getByRole('button', { name: 'Check 3 rows' }));
  expect(await screen.findByLabelText('The first area')).toBeChecked();
  expect(screen.getByLabelText(/^Load the 2 good rows/)).not.toBeChecked();
});
