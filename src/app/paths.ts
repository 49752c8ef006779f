/** Every address of the client, once. A leaf: it imports nothing, so that any part may import it. */
export const paths = {
  home: () => '/',
  signIn: (returnTo?: string) => (returnTo ? `/sign-in?returnTo=${encodeURIComponent(returnTo)}` : '/sign-in'),
  /** Answered by the server, which sends the browser on to the hospital account. */
  startSignIn: (returnTo: string) => `/auth/sign-in?returnTo=${encodeURIComponent(returnTo)}`,
  tonight: (siteId: string) => `/sites/${siteId}/tonight`,
  tonightThen: (siteId: string, outlookId: string) => `/sites/${siteId}/tonight/${outlookId}`,
  handover: (siteId: string) => `/sites/${siteId}/handover`,
  visitLogs: (siteId: string) => `/sites/${siteId}/logs`,
  newVisitLog: (siteId: string) => `/sites/${siteId}/logs/new`,
  visitLog: (siteId: string, logId: string) => `/sites/${siteId}/logs/${logId}`,
  arrivalModels: (siteId: string) => `/sites/${siteId}/models`,
  arrivalModel: (siteId: string, modelId: string) => `/sites/${siteId}/models/${modelId}`,
  tokens: () => '/tokens',
  siteTokens: (siteId: string) => `/sites/${siteId}/tokens`,
  howNumbersAreMade: (part?: string) => (part ? `/how#${part}` : '/how'),
} as const;
