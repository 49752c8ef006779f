import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import * as recipientsApi from '../../../shared/api/brief-recipients.ts';
import * as api from '../../../shared/api/briefs.ts';
import type { BodyOf } from '../../../shared/api/contract.ts';
import { call } from '../../lib/api-client.ts';

const briefsKey = (siteId: string) => ['briefs', siteId] as const;

/** The archive, the schedule and one's own subscription. Looked at again while a brief is on its way. */
export function useBriefs(siteId: string) {
  return useQuery({
    queryKey: [...briefsKey(siteId), 'list'],
    queryFn: ({ signal }) => call(api.listBriefs, { params: { siteId }, signal }),
    refetchInterval: ({ state }) => (state.data?.briefs.some((brief) => brief.state === 'sending') ? 3000 : false),
  });
}

export function useBrief(siteId: string, briefId: string) {
  return useQuery({
    queryKey: [...briefsKey(siteId), 'one', briefId],
    queryFn: ({ signal }) => call(api.getBrief, { params: { siteId, briefId }, signal }),
    refetchInterval: ({ state }) => (state.data?.state === 'sending' ? 2000 : false),
  });
}

export function useDeliveries(siteId: string, briefId: string, asked: boolean) {
  return useQuery({
    queryKey: [...briefsKey(siteId), 'deliveries', briefId],
    queryFn: ({ signal }) => call(api.listDeliveries, { params: { siteId, briefId }, signal }),
    enabled: asked,
    refetchInterval: ({ state }) =>
      state.data?.deliveries.some((each) => each.state === 'waiting' || each.state === 'handing over') ? 2000 : false,
  });
}

export function useRecipients(siteId: string, asked: boolean) {
  return useQuery({
    queryKey: [...briefsKey(siteId), 'recipients'],
    queryFn: ({ signal }) => call(recipientsApi.listRecipients, { params: { siteId }, signal }),
    enabled: asked,
  });
}

/** Where the HTML part of a brief is answered, for a frame. */
export function briefHtmlAddress(siteId: string, briefId: string): string {
  return `/api/sites/${encodeURIComponent(siteId)}/briefs/${encodeURIComponent(briefId)}/html`;
}

function useBriefMutation<Input, Output>(siteId: string, done: string, run: (input: Input) => Promise<Output>) {
  const queryClient = useQueryClient();
  return useMutation({
    meta: { done },
    mutationFn: run,
    onSuccess: () => queryClient.invalidateQueries({ queryKey: briefsKey(siteId) }),
  });
}

export function useComposeBrief(siteId: string) {
  return useBriefMutation(siteId, 'A draft is being composed.', () =>
    call(api.composeBrief, { params: { siteId }, kept: 'No draft was made.' }),
  );
}

export function useSendBrief(siteId: string, briefId: string) {
  return useBriefMutation(siteId, 'The brief is being sent.', () =>
    call(api.sendBrief, { params: { siteId, briefId }, kept: 'The brief is as it was.' }),
  );
}

export function useSendTest(siteId: string, briefId: string) {
  return useBriefMutation(siteId, 'A test is on its way to you.', () =>
    call(api.sendTestBrief, { params: { siteId, briefId }, kept: 'No test was sent.' }),
  );
}

export function useSendAgain(siteId: string, briefId: string) {
  return useBriefMutation(siteId, 'It is being sent again.', (deliveryId: string) =>
    call(api.resendDelivery, { params: { siteId, briefId, deliveryId }, kept: 'Nothing was sent again.' }),
  );
}

export function useSaveSettings(siteId: string) {
  return useBriefMutation(siteId, 'The schedule was saved.', (body: BodyOf<typeof api.saveBriefSettings>) =>
    call(api.saveBriefSettings, { params: { siteId }, body }),
  );
}

export function useAddRecipient(siteId: string) {
  return useBriefMutation(siteId, 'The recipient was added.', (body: BodyOf<typeof recipientsApi.addRecipient>) =>
    call(recipientsApi.addRecipient, { params: { siteId }, body }),
  );
}

export function useRemoveRecipient(siteId: string) {
  return useBriefMutation(siteId, 'The recipient was removed.', (recipientId: string) =>
    call(recipientsApi.removeRecipient, {
      params: { siteId, recipientId },
      kept: 'The recipient still receives the brief.',
    }),
  );
}

export function useConfirmAddress(siteId: string) {
  return useBriefMutation(siteId, 'The address was confirmed.', (recipientId: string) =>
    call(recipientsApi.confirmAddress, { params: { siteId, recipientId }, kept: 'The address still gets nothing.' }),
  );
}

export function useSetSubscription(siteId: string) {
  return useBriefMutation(siteId, 'Your subscription was changed.', (subscribed: boolean) =>
    call(recipientsApi.setSubscription, {
      params: { siteId },
      body: { subscribed },
      kept: 'Your subscription is as it was.',
    }),
  );
}
